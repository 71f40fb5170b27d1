import { COMPARTMENT_KINDS, type CompartmentKind } from '@shared/domain/cold-unit';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { nextSaveBy, shareOfHours, type StripFacts, stripState } from './cold-strip-scale';

/** The hours between which save-bys are counted together; they lie on the ruler's own lines. */
export const FRONT_EDGES: readonly number[] = [0, 1, 2, 4, 8, 12, 24, 48];

export interface FrontBar {
  readonly fromHours: number;
  readonly toHours: number;
  /** Places on the common ruler, 0 to 1. */
  readonly from: number;
  readonly to: number;
  readonly count: number;
}

export interface FrontLane {
  readonly kind: CompartmentKind;
  readonly bars: readonly FrontBar[];
  /** Compartments whose save-by has passed, or lies beyond the ruler, or that have none. */
  readonly lost: number;
  readonly later: number;
}

/** All cold strips of a storm in one: how many compartments come to their save-by in which hours. */
export function saveByFront(calls: readonly StripFacts[], now: Instant): readonly FrontLane[] {
  const lanes: FrontLane[] = [];
  for (const kind of COMPARTMENT_KINDS) {
    const counts = new Array<number>(FRONT_EDGES.length - 1).fill(0);
    let lost = 0;
    let later = 0;
    for (const { compartments, restoredAt } of calls) {
      for (const compartment of compartments) {
        if (compartment.kind !== kind) continue;
        const state = stripState(compartment, restoredAt, now);
        if (state === 'stopped') continue;
        if (state === 'lost') lost++;
        else {
          const bin = binOf(compartment.saveByAt, now);
          if (bin < 0) later++;
          else counts[bin] = (counts[bin] ?? 0) + 1;
        }
      }
    }
    const bars = counts.map((count, i) => barOf(i, count));
    if (lost + later + counts.reduce((a, b) => a + b, 0) > 0) {
      lanes.push({ kind, bars, lost, later });
    }
  }
  return lanes;
}

/** Which interval a save-by falls into; an edge belongs to the interval that it begins. */
function binOf(saveByAt: Instant | null, now: Instant): number {
  if (saveByAt === null) return -1;
  const hours = (saveByAt - now) / HOUR_MS;
  return FRONT_EDGES.findIndex((edge, i) => {
    const end = FRONT_EDGES[i + 1];
    return end !== undefined && hours >= edge && hours < end;
  });
}

function barOf(index: number, count: number): FrontBar {
  const fromHours = FRONT_EDGES[index] ?? 0;
  const toHours = FRONT_EDGES[index + 1] ?? fromHours;
  return {
    fromHours,
    toHours,
    from: shareOfHours(fromHours),
    to: shareOfHours(toHours),
    count,
  };
}

/** The calls of which something can still be saved, and the earliest save-by among them. */
export function frontEdge(
  calls: readonly StripFacts[],
  now: Instant,
): { readonly savable: number; readonly nextAt: Instant | null } {
  let savable = 0;
  let nextAt: Instant | null = null;
  for (const call of calls) {
    const at = nextSaveBy(call, now);
    if (at === null) continue;
    savable++;
    if (nextAt === null || at < nextAt) nextAt = at;
  }
  return { savable, nextAt };
}
