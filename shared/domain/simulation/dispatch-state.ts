import { MOST_OVERTIME, type Storm, type StormCall, type StormTechnician } from './storm';

/** What a policy can know at a moment: what is open and where people are, not what will come. */
export interface DispatchState {
  readonly now: number;
  readonly storm: Pick<Storm, 'places' | 'expectedDrive' | 'end'>;
  /** Calls that wait for a visit, and that nobody is on the way to, by the time of the call. */
  readonly open: readonly StormCall[];
  readonly crew: readonly CrewMember[];
  /** Every call that has come in so far, settled ones too. */
  readonly seen: readonly StormCall[];
}

export interface CrewMember {
  readonly technician: StormTechnician;
  /** Where the technician is, or will be when free. */
  readonly place: number;
  /** When the technician is thought to be free; now, for one who waits. */
  readonly freeAt: number;
  /** Waits for the next stop, within a shift. */
  readonly isFree: boolean;
  /** The shift that runs or comes next; the number of shifts when all are over. */
  readonly shift: number;
  readonly partsLeft: Readonly<Record<string, number>>;
}

export interface Assignment {
  readonly technician: string;
  readonly call: string;
}

export interface Decision {
  /** Who drives where at once. */
  readonly assignments: readonly Assignment[];
  /** Ask again then, though nothing may have happened. */
  readonly wakeAt?: number;
}

/** A way to dispatch. It keeps its own memory between questions; each run takes a new one. */
export interface Policy {
  decide(state: DispatchState): Decision;
}

export const driveBetween = (
  { expectedDrive, places }: Pick<Storm, 'expectedDrive' | 'places'>,
  from: number,
  to: number,
): number => expectedDrive[from * places + to]!;

/** When a visit may begin for one who arrives then. */
export const beginning = (call: StormCall, arrival: number): number =>
  call.window && call.window[1] >= arrival ? Math.max(arrival, call.window[0]) : arrival;

/** Whether somebody has the skills, the part and the time for a call, by what is thought. */
export function mayTake(member: CrewMember, call: StormCall, state: DispatchState): boolean {
  const { technician, place, partsLeft, shift } = member;
  if (!call.skills.every((skill) => technician.skills.includes(skill))) return false;
  if (call.part !== null && (partsLeft[call.part] ?? 0) < 1) return false;
  const hours = technician.shifts[shift];
  if (!hours) return false;
  const begin = beginning(call, state.now + driveBetween(state.storm, place, call.place));
  const home = driveBetween(state.storm, call.place, technician.home);
  return begin + call.expectedService + home <= hours.end + MOST_OVERTIME;
}
