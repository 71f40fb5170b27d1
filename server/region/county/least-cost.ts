/** A heap of (cost, item) pairs that gives the cheapest first; equal costs come in order of item. */
export class CheapestFirst {
  private readonly costs: number[] = [];
  private readonly items: number[] = [];

  get size(): number {
    return this.items.length;
  }

  push(cost: number, item: number): void {
    let at = this.items.length;
    this.costs.push(cost);
    this.items.push(item);
    while (at > 0) {
      const parent = (at - 1) >> 1;
      if (!this.isBefore(at, parent)) break;
      this.swap(at, parent);
      at = parent;
    }
  }

  pop(): { cost: number; item: number } | null {
    const cost = this.costs[0];
    const item = this.items[0];
    if (cost === undefined || item === undefined) return null;
    const last = this.items.length - 1;
    this.swap(0, last);
    this.costs.pop();
    this.items.pop();
    let at = 0;
    for (;;) {
      const left = 2 * at + 1;
      const right = left + 1;
      let least = at;
      if (left < last && this.isBefore(left, least)) least = left;
      if (right < last && this.isBefore(right, least)) least = right;
      if (least === at) break;
      this.swap(at, least);
      at = least;
    }
    return { cost, item };
  }

  private isBefore(a: number, b: number): boolean {
    const difference = this.costs[a]! - this.costs[b]!;
    return difference < 0 || (difference === 0 && this.items[a]! < this.items[b]!);
  }

  private swap(a: number, b: number): void {
    [this.costs[a], this.costs[b]] = [this.costs[b]!, this.costs[a]!];
    [this.items[a], this.items[b]] = [this.items[b]!, this.items[a]!];
  }
}
