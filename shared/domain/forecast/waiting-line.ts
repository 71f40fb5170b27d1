import { MINUTE_MS, type Instant } from '../instant';
import { nthLargest } from './nth-largest';
import type { World } from './world';

/** A dispatcher and the planner look at the whole line about this often. Our estimate. */
const LOOK_EVERY_MS = 45 * MINUTE_MS;
/** So many calls are put in order at a look; by the next look the order is another. */
const MOST_AT_A_LOOK = 120;
/** Whoever has waited longer comes first where nothing is left to save: too little to count elsewhere. */
const AGE_WEIGHT = 1e-12;

/**
 * The calls that wait for a visit and are on nobody's route, worked off by what is lost per minute if
 * they wait, as the board does; what a visit cannot save any more gives no urgency.
 */
export class WaitingLine {
  private readonly waiting: number[] = [];
  private readonly place: Int32Array;
  private readonly urgencies: Float64Array;
  private readonly scratch: Float64Array;
  private ordered: number[] = [];
  private next = 0;
  private lookedAt = -Infinity;

  constructor(private readonly world: World) {
    this.place = new Int32Array(world.calls.length).fill(-1);
    this.urgencies = new Float64Array(world.calls.length);
    this.scratch = new Float64Array(world.calls.length);
  }

  add(call: number): void {
    this.place[call] = this.waiting.push(call) - 1;
  }

  remove(call: number): void {
    const at = this.place[call]!;
    if (at < 0) return;
    const last = this.waiting.pop()!;
    if (last !== call) {
      this.waiting[at] = last;
      this.place[last] = at;
    }
    this.place[call] = -1;
  }

  /** Takes the most urgent call that these skills are enough for out of the line; -1 is none. */
  take(skills: number, now: Instant): number {
    if (this.waiting.length === 0) return -1;
    if (now - this.lookedAt >= LOOK_EVERY_MS) this.look(now);
    let call = this.first(skills);
    // Those that came since, or those that were not put in order.
    if (call < 0) call = this.best(skills, now);
    if (call >= 0) this.remove(call);
    return call;
  }

  private first(skills: number): number {
    const { ordered, place } = this;
    while (this.next < ordered.length && place[ordered[this.next]!]! < 0) this.next++;
    for (let i = this.next; i < ordered.length; i++) {
      const call = ordered[i]!;
      if (place[call]! >= 0 && this.isEnough(skills, call)) return call;
    }
    return -1;
  }

  private best(skills: number, now: Instant): number {
    let best = -1;
    let most = -Infinity;
    for (const call of this.waiting) {
      if (!this.isEnough(skills, call)) continue;
      const urgency = this.urgency(call, now);
      if (urgency > most) [best, most] = [call, urgency];
    }
    return best;
  }

  private isEnough(skills: number, call: number): boolean {
    return (this.world.calls.skills[call]! & ~skills) === 0;
  }

  private look(now: Instant): void {
    const { urgencies, waiting, scratch } = this;
    const { length } = waiting;
    for (let i = 0; i < length; i++) {
      const call = waiting[i]!;
      scratch[i] = urgencies[call] = this.urgency(call, now);
    }
    let chosen = waiting;
    if (length > MOST_AT_A_LOOK) {
      const least = nthLargest(scratch, length, MOST_AT_A_LOOK);
      chosen = [];
      for (let i = 0; i < length; i++)
        if (urgencies[waiting[i]!]! >= least) chosen.push(waiting[i]!);
    }
    this.ordered = [...chosen].sort((a, b) => urgencies[b]! - urgencies[a]!);
    this.next = 0;
    this.lookedAt = now;
  }

  private urgency(call: number, now: Instant): number {
    const { stakes, visitMs, calls } = this.world;
    return (
      calls.pull[call]! * stakes.urgency(call, now, visitMs) + (now - calls.at[call]!) * AGE_WEIGHT
    );
  }
}
