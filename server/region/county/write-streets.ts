import type { Tags } from '../osm-model';
import type { County } from './county';
import type { OsmBook } from './osm-book';
import { distance, type Point } from './plane';

/** How fast cars cross by ferry, loading included (common practice, no source). */
const FERRY_METRES_PER_MINUTE = 130;

/**
 * Writes streets, turn rules, the gate and the ferry. Stretches that follow each other along one
 * street become one way, as long as their tags agree and no turn rule speaks of one alone.
 */
export function writeStreets(county: County, book: OsmBook): void {
  const { graph, traffic } = county;
  const junctions = graph.nodes.map((at) => book.node(at));
  const ruled = new Set(traffic.turns.map(({ via }) => via));
  const wayOf = new Map<number, number>();
  let refs: number[] = [];
  let members: number[] = [];
  let last: { line: number; end: number; tags: string } | null = null;
  const flush = (): void => {
    if (refs.length > 1) {
      const first = members[0]!;
      // One-way streets are drawn the way that traffic runs.
      const drawn = traffic.flows[first] === -1 ? [...refs].reverse() : refs;
      const way = book.way(drawn, streetTags(county, first));
      for (const stretch of members) wayOf.set(stretch, way);
    }
    refs = [];
    members = [];
  };
  graph.stretches.forEach((stretch, index) => {
    const tags = JSON.stringify([traffic.flows[index], traffic.tags[index]]);
    if (
      last?.line !== stretch.line ||
      last.end !== stretch.from ||
      last.tags !== tags ||
      ruled.has(stretch.from)
    ) {
      flush();
      refs = [junctions[stretch.from]!];
    }
    const gated = traffic.gate?.stretch === index ? traffic.gate.point : -1;
    for (let i = 1; i < stretch.points.length - 1; i++)
      refs.push(book.node(stretch.points[i]!, i === gated ? GATE : {}));
    refs.push(junctions[stretch.to]!);
    members.push(index);
    last = { line: stretch.line, end: stretch.to, tags };
  });
  flush();
  for (const { kind, from, via, to } of traffic.turns) {
    book.relation(
      [
        { type: 'way', ref: wayOf.get(from)!, role: 'from' },
        { type: 'node', ref: junctions[via]!, role: 'via' },
        { type: 'way', ref: wayOf.get(to)!, role: 'to' },
      ],
      { type: 'restriction', restriction: kind },
    );
  }
  writeFerry(county, book, junctions);
}

const GATE: Tags = { barrier: 'gate', access: 'private', locked: 'yes' };

function streetTags({ lines, graph, streetNames, traffic }: County, stretch: number): Tags {
  const line = lines[graph.stretches[stretch]!.line]!;
  const name = streetNames.get(line.street);
  return {
    highway: line.streetClass,
    ...(name ? { name: name.name } : {}),
    ...(name?.ref ? { ref: name.ref } : {}),
    ...(line.isBridge ? { bridge: 'yes', layer: '1' } : {}),
    ...(line.water === 'ford' ? { ford: 'yes' } : {}),
    ...(line.water === 'floods' ? { flood_prone: 'yes' } : {}),
    ...(traffic.flows[stretch] === 0 ? {} : { oneway: 'yes' }),
    ...traffic.tags[stretch],
  };
}

function writeFerry({ ferry, graph }: County, book: OsmBook, junctions: readonly number[]): void {
  if (!ferry) return;
  const junctionAt = (landing: Point): number | undefined =>
    junctions[graph.nodes.findIndex((p) => distance(p, landing) < 7)];
  const [west, east] = [junctionAt(ferry.west), junctionAt(ferry.east)];
  if (west === undefined || east === undefined) return;
  const minutes = Math.ceil(distance(ferry.west, ferry.east) / FERRY_METRES_PER_MINUTE);
  book.way([west, east], {
    route: 'ferry',
    name: 'Sedge Estuary Ferry',
    motor_vehicle: 'yes',
    foot: 'yes',
    duration: `00:${String(minutes).padStart(2, '0')}`,
  });
}
