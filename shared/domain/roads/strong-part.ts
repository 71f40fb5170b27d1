/**
 * The largest set of nodes that all reach each other (Tarjan, "Depth-first search and linear graph
 * algorithms", SIAM J. Computing 1, 1972; without recursion, since roads are long).
 *
 * @param first arcs of node v are `head[first[v]] … head[first[v + 1] - 1]`
 * @returns 1 for each node of it; among parts of equal size the one with the lowest node
 */
export function largestStrongPart(first: Int32Array, head: Int32Array): Uint8Array {
  const count = first.length - 1;
  const index = new Int32Array(count).fill(-1);
  const low = new Int32Array(count);
  const part = new Int32Array(count).fill(-1);
  const waiting: number[] = [];
  const path: number[] = [];
  const next = first.slice(0, count);
  const sizes: number[] = [];
  let found = 0;
  for (let root = 0; root < count; root++) {
    if (index[root]! >= 0) continue;
    path.push(root);
    index[root] = low[root] = found++;
    waiting.push(root);
    while (path.length > 0) {
      const v = path.at(-1)!;
      if (next[v]! < first[v + 1]!) {
        const w = head[next[v]!++]!;
        if (index[w]! < 0) {
          index[w] = low[w] = found++;
          path.push(w);
          waiting.push(w);
        } else if (part[w]! < 0) low[v] = Math.min(low[v]!, index[w]!);
        continue;
      }
      path.pop();
      const before = path.at(-1);
      if (before !== undefined) low[before] = Math.min(low[before]!, low[v]!);
      if (low[v] !== index[v]) continue;
      let size = 0;
      for (let w = -1; w !== v; size++) {
        w = waiting.pop()!;
        part[w] = sizes.length;
      }
      sizes.push(size);
    }
  }
  const largest = largestOf(part, sizes);
  return Uint8Array.from(part, (own) => (own === largest ? 1 : 0));
}

function largestOf(part: Int32Array, sizes: readonly number[]): number {
  let largest = -1;
  for (const own of part) if (largest < 0 || sizes[own]! > sizes[largest]!) largest = own;
  return largest;
}
