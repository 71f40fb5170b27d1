import { createHash } from 'node:crypto';
import type { OsmData } from '../osm-model';

/** Names the data itself, not the bytes of a file: how a compressor packs may change between releases. */
export function fingerprintOf({ nodes, ways, relations }: OsmData): string {
  const hash = createHash('sha256');
  for (const part of [nodes, ways, relations]) hash.update(JSON.stringify(part));
  return hash.digest('hex').slice(0, 12);
}
