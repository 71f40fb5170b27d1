/** A label's place on the canvas, in CSS pixels. */
export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

export const isInBox = (box: Box, x: number, y: number): boolean =>
  x >= box.x && x <= box.x + box.width && y >= box.y && y <= box.y + box.height;

/** Keeps labels from lying on each other: who asks first has the place. */
export class LabelBoxes {
  private readonly taken: Box[] = [];

  /** Whether the place was free; it is taken then. */
  take(box: Box): boolean {
    if (this.taken.some((other) => overlap(box, other))) return false;
    this.taken.push(box);
    return true;
  }

  /** Keeps a place free of labels, whatever else stands there. */
  reserve(box: Box): void {
    this.taken.push(box);
  }

  /** The first of some places that is free, if any. */
  takeFirst(boxes: readonly Box[]): Box | null {
    return boxes.find((box) => this.take(box)) ?? null;
  }
}

const overlap = (a: Box, b: Box): boolean =>
  a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;
