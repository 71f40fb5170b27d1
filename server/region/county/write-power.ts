import { FEEDER_TAG } from '../feeders';
import type { Tags } from '../osm-model';
import type { Step } from './circuits';
import type { County } from './county';
import type { OsmBook } from './osm-book';
import { distance, simplified, type Point } from './plane';

/** Poles stand beside the street, not on it: metres from its middle. */
const ASIDE = 6;

/** Writes substations, the areas of the feeders and their main lines, by the tags that the importer reads. */
export function writePower({ power, graph }: County, book: OsmBook): void {
  for (const { name, at } of power.substations)
    book.node(at, { power: 'substation', substation: 'distribution', name: `${name} Substation` });
  const corners = new Map<string, number>();
  const corner = (p: Point): number => {
    const key = `${p[0]},${p[1]}`;
    const known = corners.get(key) ?? book.node(p);
    corners.set(key, known);
    return known;
  };
  power.feeders.forEach((feeder, k) => {
    const { wave, hours } = power.restorations[k]!;
    const tags: Tags = {
      [FEEDER_TAG.key]: FEEDER_TAG.value,
      name: feeder.name,
      ref: feeder.ref,
      substation: `${power.substations[feeder.substation]!.name} Substation`,
      'restoration:wave': String(wave),
      'restoration:hours': String(hours),
    };
    const rings = power.outlines[k]!;
    const refs = rings.map((ring) => ring.map(corner));
    if (refs.length === 1) book.way(refs[0]!, tags);
    else
      book.relation(
        refs.map((own, i) => ({
          type: 'way',
          ref: book.way(own, {}),
          role: turns(rings[i]!) > 0 ? 'outer' : 'inner',
        })),
        { type: 'multipolygon', ...tags },
      );
    for (const piece of feeder.trunk) {
      const line = aside(simplified(trunkLine(piece, graph.stretches), 1.5));
      book.way(
        line.map((p) => book.node(p)),
        { power: 'minor_line', name: feeder.name, ref: feeder.ref },
      );
    }
  });
}

/** Above zero for a ring that runs counter-clockwise. */
const turns = (ring: readonly Point[]): number =>
  ring.reduce((sum, [x, y], i) => {
    const [u, v] = ring[(i + 1) % ring.length]!;
    return sum + x * v - u * y;
  }, 0);

function trunkLine(piece: readonly Step[], stretches: County['graph']['stretches']): Point[] {
  const line: Point[] = [];
  for (const { node, by } of piece) {
    if (by < 0) continue;
    const { to, points } = stretches[by]!;
    const onward = to === node ? points : [...points].reverse();
    line.push(...(line.length === 0 ? onward : onward.slice(1)));
  }
  return line;
}

/** The line, moved to its right. */
function aside(line: readonly Point[]): Point[] {
  return line.map((p, i) => {
    const a = line[Math.max(0, i - 1)]!;
    const b = line[Math.min(line.length - 1, i + 1)]!;
    const span = Math.max(0.01, distance(a, b));
    return [p[0] + ((b[1] - a[1]) / span) * ASIDE, p[1] - ((b[0] - a[0]) / span) * ASIDE];
  });
}
