/** What comes next: moments with a number each, the earliest first. A binary heap in flat arrays. */
export class EventHeap {
  private readonly times: number[] = [];
  private readonly codes: number[] = [];

  get nextAt(): number {
    return this.times.length > 0 ? this.times[0]! : Infinity;
  }

  push(at: number, code: number): void {
    const { times, codes } = this;
    let i = times.length;
    times.push(at);
    codes.push(code);
    while (i > 0) {
      const parent = (i - 1) >> 1;
      if (times[parent]! <= at) break;
      times[i] = times[parent]!;
      codes[i] = codes[parent]!;
      i = parent;
    }
    times[i] = at;
    codes[i] = code;
  }

  /** The number of the earliest; only while there is one. */
  pop(): number {
    const { times, codes } = this;
    const first = codes[0]!;
    const at = times.pop()!;
    const code = codes.pop()!;
    const { length } = times;
    if (length === 0) return first;
    let i = 0;
    for (;;) {
      let child = 2 * i + 1;
      if (child >= length) break;
      if (child + 1 < length && times[child + 1]! < times[child]!) child++;
      if (times[child]! >= at) break;
      times[i] = times[child]!;
      codes[i] = codes[child]!;
      i = child;
    }
    times[i] = at;
    codes[i] = code;
    return first;
  }
}
