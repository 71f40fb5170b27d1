import { beginning, type CrewMember, type DispatchState, type Policy } from './dispatch-state';
import { NEVER, type Storm, type StormCall, type StormTechnician } from './storm';

/** What became of a call. */
export interface CallOutcome {
  readonly call: StormCall;
  /** When the visit began; null when there was none. */
  readonly startedAt: number | null;
  readonly technician: string | null;
  readonly isCalledOff: boolean;
}

export interface StormOutcome {
  /** One for each call, in their order. */
  readonly calls: readonly CallOutcome[];
  readonly driveSeconds: number;
  readonly overtimeSeconds: number;
  readonly decisions: number;
}

/**
 * Plays a storm under a policy. Only the next stop of each technician is ever settled; everything behind it
 * is open until somebody is free again.
 */
export function runStorm(storm: Storm, policy: Policy): StormOutcome {
  return new Run(storm, policy).toEnd();
}

interface Worker {
  readonly technician: StormTechnician;
  place: number;
  /** Busy until then; as it is, and as it is thought while under way. */
  busyUntil: number;
  thoughtFreeAt: (now: number) => number;
  shift: number;
  isAway: boolean;
  readonly parts: Record<string, number>;
}

class Run {
  private readonly started = new Map<string, { at: number; technician: string }>();
  private readonly taken = new Set<string>();
  private readonly moments: number[];
  private readonly workers: readonly Worker[];
  private driveSeconds = 0;
  private overtimeSeconds = 0;
  private decisions = 0;

  constructor(
    private readonly storm: Storm,
    private readonly policy: Policy,
  ) {
    this.workers = storm.technicians.map((technician) => ({
      technician,
      place: technician.home,
      busyUntil: 0,
      thoughtFreeAt: (now) => now,
      shift: 0,
      isAway: true,
      parts: { ...technician.parts },
    }));
    this.moments = [
      ...storm.calls.map(({ readyAt }) => readyAt),
      ...storm.technicians.flatMap(({ shifts }) =>
        shifts.flatMap(({ start, end }) => [start, end]),
      ),
    ];
  }

  toEnd(): StormOutcome {
    // A sorted list would do as well; a few thousand moments are soon looked through.
    for (let now = this.nextMoment(-1); now < NEVER; now = this.nextMoment(now)) this.live(now);
    return {
      calls: this.storm.calls.map((call) => {
        const visit = this.started.get(call.id);
        return {
          call,
          startedAt: visit?.at ?? null,
          technician: visit?.technician ?? null,
          isCalledOff: call.cancelledAt < (visit?.at ?? NEVER),
        };
      }),
      driveSeconds: this.driveSeconds,
      overtimeSeconds: this.overtimeSeconds,
      decisions: this.decisions,
    };
  }

  private nextMoment(after: number): number {
    let next = NEVER;
    for (const moment of this.moments) if (moment > after && moment < next) next = moment;
    return next;
  }

  private live(now: number): void {
    for (const worker of this.workers) this.beginShift(worker, now);
    if (this.workers.some((worker) => this.isFree(worker, now))) {
      const state = this.stateAt(now);
      if (state.open.length > 0) {
        this.decisions++;
        const { assignments, wakeAt } = this.policy.decide(state);
        for (const { technician, call } of assignments) this.send(technician, call, now);
        if (wakeAt !== undefined && wakeAt > now) this.moments.push(wakeAt);
      }
    }
    for (const worker of this.workers) this.endShift(worker, now);
  }

  private beginShift(worker: Worker, now: number): void {
    const hours = worker.technician.shifts[worker.shift];
    if (worker.isAway && hours && now >= hours.start) worker.isAway = false;
  }

  /** Who is free at or after the shift's end and has not been sent on goes home. */
  private endShift(worker: Worker, now: number): void {
    const hours = worker.technician.shifts[worker.shift];
    if (worker.isAway || !hours || now < hours.end || worker.busyUntil > now) return;
    const drive = this.actualDrive(worker.place, worker.technician.home);
    this.driveSeconds += drive;
    this.overtimeSeconds += Math.max(0, now + drive - hours.end);
    worker.place = worker.technician.home;
    worker.shift++;
    worker.isAway = true;
    worker.thoughtFreeAt = (at) => at;
  }

  private isFree(worker: Worker, now: number): boolean {
    return !worker.isAway && worker.busyUntil <= now;
  }

  private send(technician: string, id: string, now: number): void {
    const worker = this.workers.find((one) => one.technician.id === technician)!;
    const call = this.storm.calls.find((one) => one.id === id)!;
    if (!this.isFree(worker, now) || this.taken.has(id) || call.readyAt > now) {
      throw new Error(`${technician} cannot be sent to ${id} now.`);
    }
    this.taken.add(id);
    const drive = this.actualDrive(worker.place, call.place);
    const arrival = now + drive;
    const thoughtBegin = beginning(
      call,
      now + this.storm.expectedDrive[worker.place * this.storm.places + call.place]!,
    );
    const begin = beginning(call, arrival);
    const isCalledOff = call.cancelledAt < begin;
    this.driveSeconds += drive;
    worker.place = call.place;
    worker.busyUntil = isCalledOff
      ? Math.max(arrival, Math.min(begin, call.cancelledAt))
      : begin + call.actualService;
    worker.thoughtFreeAt = (at) =>
      Math.max(at + 60, (at < arrival ? thoughtBegin : begin) + call.expectedService);
    if (!isCalledOff) {
      this.started.set(id, { at: begin, technician });
      if (call.part !== null) {
        if ((worker.parts[call.part] ?? 0) < 1)
          throw new Error(`${technician} has no ${call.part}.`);
        worker.parts[call.part]! -= 1;
      }
    }
    this.moments.push(worker.busyUntil);
  }

  private stateAt(now: number): DispatchState {
    const seen = this.storm.calls.filter((call) => call.readyAt <= now);
    return {
      now,
      storm: this.storm,
      seen,
      open: seen.filter((call) => !this.taken.has(call.id) && call.cancelledAt > now),
      crew: this.workers.map((worker): CrewMember => {
        const isFree = this.isFree(worker, now);
        const begins = worker.technician.shifts[worker.shift]?.start ?? NEVER;
        return {
          technician: worker.technician,
          place: worker.place,
          freeAt: worker.isAway ? Math.max(now, begins) : isFree ? now : worker.thoughtFreeAt(now),
          isFree,
          shift: worker.shift,
          partsLeft: worker.parts,
        };
      }),
    };
  }

  private actualDrive(from: number, to: number): number {
    return this.storm.actualDrive[from * this.storm.places + to]!;
  }
}
