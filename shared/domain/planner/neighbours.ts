import type { CompiledProblem } from './compiled-problem';

/**
 * For each job the `size` jobs nearest to it by the drive there and back, near to far, the job itself
 * not among them; row-major, job × size.
 */
export function nearestJobs(c: CompiledProblem, size: number): Int32Array {
  const { jobCount, locations, travel, travelTo, loc } = c;
  const result = new Int32Array(jobCount * size);
  const distance = new Float64Array(jobCount);
  const order = new Int32Array(jobCount);
  for (let job = 0; job < jobCount; job++) {
    const row = loc[job]! * locations;
    for (let other = 0; other < jobCount; other++) {
      distance[other] = travel[row + loc[other]!]! + travelTo[row + loc[other]!]!;
      order[other] = other;
    }
    distance[job] = Infinity;
    if (size < jobCount - 1) moveSmallestFirst(order, distance, size);
    const nearest = order.subarray(0, size);
    // The number breaks ties, so that the same problem always gives the same lists.
    nearest.sort((a, b) => distance[a]! - distance[b]! || a - b);
    result.set(nearest, job * size);
  }
  return result;
}

/** Hoare's selection: afterwards the `size` smallest stand first, in any order. */
function moveSmallestFirst(order: Int32Array, key: Float64Array, size: number): void {
  let left = 0;
  let right = order.length - 1;
  while (left < right) {
    const pivot = key[order[(left + right) >> 1]!]!;
    let i = left;
    let j = right;
    while (i <= j) {
      while (key[order[i]!]! < pivot) i++;
      while (key[order[j]!]! > pivot) j--;
      if (i <= j) {
        const swapped = order[i]!;
        order[i++] = order[j]!;
        order[j--] = swapped;
      }
    }
    if (size - 1 <= j) right = j;
    else if (size - 1 >= i) left = i;
    else return;
  }
}
