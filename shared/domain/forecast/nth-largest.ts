/**
 * The n-th largest of the first `length` numbers, which come out in another order. Hoare's selection
 * (Communications of the ACM 4(7), 1961): on average in time that grows with the length alone.
 */
export function nthLargest(values: Float64Array, length: number, n: number): number {
  const wanted = n - 1;
  let low = 0;
  let high = length - 1;
  while (low < high) {
    const pivot = values[(low + high) >> 1]!;
    let i = low;
    let j = high;
    while (i <= j) {
      while (values[i]! > pivot) i++;
      while (values[j]! < pivot) j--;
      if (i > j) break;
      const kept = values[i]!;
      values[i++] = values[j]!;
      values[j--] = kept;
    }
    if (wanted <= j) high = j;
    else if (wanted >= i) low = i;
    else break;
  }
  return values[wanted]!;
}
