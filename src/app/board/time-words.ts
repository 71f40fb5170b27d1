import type { Instant } from '@shared/domain/instant';
import { MINUTE_MS } from '@shared/domain/instant';
import { duration } from '../core/zone';

/** "in 25 min", "now", "2 h 05 ago". */
export function fromNowWords(at: Instant, now: Instant): string {
  const away = at - now;
  if (Math.abs(away) < MINUTE_MS) return 'now';
  return away > 0 ? `in ${duration(away)}` : `${duration(-away)} ago`;
}
