import type { LonLat } from '@shared/contract/common';
import { thinned } from '@shared/domain/thin-line';
import { metresPerPixel, toWorld, type WorldPoint } from './world';

/** What is thinner than this is not seen. */
const TRUE_TO_PX = 0.75;

/** A way along the roads, projected once for each zoom with as many points as can be told apart there. */
export class Way {
  private readonly byZoom = new Map<number, readonly WorldPoint[]>();

  constructor(readonly line: readonly LonLat[]) {}

  at(zoom: number): readonly WorldPoint[] {
    const whole = Math.round(zoom);
    const known = this.byZoom.get(whole);
    if (known) return known;
    const lat = this.line[0]?.[1] ?? 0;
    const points = thinned(this.line, TRUE_TO_PX * metresPerPixel(lat, whole)).map(toWorld);
    this.byZoom.set(whole, points);
    return points;
  }
}
