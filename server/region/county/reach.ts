import type { Stretch } from './junctions';
import type { Flow } from './traffic';

/** Which junctions can be reached from, and can reach, the first one that has a street. */
export function isMutual(
  nodeCount: number,
  stretches: readonly Stretch[],
  flows: readonly Flow[],
): boolean[] {
  const onward = reached(nodeCount, stretches, flows, 1);
  const back = reached(nodeCount, stretches, flows, -1);
  return onward.map((is, node) => is && back[node]!);
}

function reached(
  nodeCount: number,
  stretches: readonly Stretch[],
  flows: readonly Flow[],
  sense: 1 | -1,
): boolean[] {
  const next: number[][] = Array.from({ length: nodeCount }, () => []);
  stretches.forEach(({ from, to }, i) => {
    if (flows[i] !== -sense) next[from]!.push(to);
    if (flows[i] !== sense) next[to]!.push(from);
  });
  const seen = new Array<boolean>(nodeCount).fill(false);
  const open = stretches.length > 0 ? [stretches[0]!.from] : [];
  for (let node = open.pop(); node !== undefined; node = open.pop()) {
    if (seen[node]) continue;
    seen[node] = true;
    open.push(...next[node]!);
  }
  return seen;
}
