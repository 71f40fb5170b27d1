import { createHash } from 'node:crypto';

/** One command id for one thing that the service told, however often it tells it. */
export function webhookCommandId(...told: readonly string[]): string {
  const hex = createHash('sha256').update(told.join('\n')).digest('hex');
  // Shaped as RFC 9562, version 8: an id made by our own rule.
  const variant = ((parseInt(hex.slice(16, 18), 16) & 0x3f) | 0x80).toString(16);
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${variant}${hex.slice(18, 20)}-${hex.slice(20, 32)}`;
}
