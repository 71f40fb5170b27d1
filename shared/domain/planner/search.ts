import type { CompiledProblem } from './compiled-problem';
import { exchangeTails } from './exchange-tails';
import { type Insertion } from './insertion';
import { MakingRoom } from './make-room';
import { nearestJobs, type Neighbours } from './neighbours';
import type { SeededRandom } from './random';
import type { RecreateOrders } from './recreate-orders';
import { Ruin } from './ruin';
import { type WorkingPlan } from './working-plan';

const NEIGHBOURS = 40;
const TAILS_EVERY = 10;
const ROOM_EVERY = 15;
/** With fewer jobs a look at all gaps costs no more than one at those beside near jobs. */
const FEW_JOBS = 50;
/** One round in so many looks at all gaps all the same: near jobs alone do not lead everywhere. */
const ALL_GAPS_EVERY = 20;

/**
 * Ruin and recreate with simulated annealing: take strings of stops out of neighbouring routes, put
 * the absent jobs back greedily, keep the result if it is better or, by chance, not much worse.
 * After Christiaens & Vanden Berghe, "Slack Induction by String Removals for Vehicle Routing
 * Problems", Transportation Science 54(2), 2020; with an exchange of route tails, and with leaving
 * a job out as a choice that has a price.
 */
export class Search {
  readonly near: Neighbours;
  private readonly insertion: Insertion;
  private readonly orders: RecreateOrders;
  private readonly ruin: Ruin;
  readonly room: MakingRoom;
  private readonly movable: Int32Array;

  constructor(
    readonly plan: WorkingPlan,
    private readonly random: SeededRandom,
    insertion: Insertion,
    orders: RecreateOrders,
  ) {
    const { c } = plan;
    this.near = nearestJobs(c, NEIGHBOURS);
    this.insertion = insertion;
    this.orders = orders;
    this.ruin = new Ruin(plan, this.near, random, this.orders.byDensity);
    this.room = new MakingRoom(plan, this.near, insertion);
    this.movable = Int32Array.from(movableJobs(c));
  }

  /** Whether there is anything to search. */
  get hasChoice(): boolean {
    return this.movable.length > 0 && this.plan.routes.length > 0;
  }

  /**
   * One round.
   *
   * @param temperature how much worse a result may be and still be kept, in money
   * @returns how much worse the result was, kept or not; below 0 when it was better
   */
  step(temperature: number): number {
    const { plan, random } = this;
    const before = plan.price;
    const seed = this.movable[random.below(this.movable.length)]!;
    const isChanged =
      random.below(TAILS_EVERY) === 0
        ? exchangeTails(plan, this.near, random, seed)
        : random.below(ROOM_EVERY) === 0 && this.room.forJob(this.oneToServe(seed));
    if (!isChanged) {
      this.ruin.around(seed);
      this.recreate();
    }
    const worse = plan.price - before;
    const isRefused = worse > 0 && worse >= -temperature * Math.log(random.unit() + 1e-12);
    if (isRefused || !plan.isSound) plan.undo();
    else plan.keep();
    return worse;
  }

  /** A job that is on no route, the dearer of two; where there is none, the one given. */
  private oneToServe(seed: number): number {
    const { plan, random } = this;
    const { bank, bankCount, c } = plan;
    if (plan.routeOf[seed]! < 0 || bankCount === 0) return seed;
    const one = bank[random.below(bankCount)]!;
    const other = bank[random.below(bankCount)]!;
    return c.absentPrice[one]! > c.absentPrice[other]! ? one : other;
  }

  private recreate(): void {
    const { random, ruin, insertion, near } = this;
    this.orders.arrange(ruin.absent, random);
    const looksEverywhere = this.plan.c.jobCount <= FEW_JOBS || random.below(ALL_GAPS_EVERY) === 0;
    for (const job of ruin.absent) {
      if (looksEverywhere) insertion.insert(job, near, true);
      else insertion.insertNear(job, near, true);
    }
  }
}

function movableJobs(c: CompiledProblem): number[] {
  return Array.from({ length: c.jobCount }, (_, job) => job).filter((job) => !c.isFrozen[job]);
}
