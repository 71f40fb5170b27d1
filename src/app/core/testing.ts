import type { BoardPicture } from '@shared/contract/board';
import type { CallRow } from '@shared/contract/calls';
import type { BoardChange, Numbered, ServerEvents } from '@shared/contract/realtime';
import type { StopDto, TechnicianDto } from '@shared/contract/routes';
import type { Role } from '@shared/contract/common';
import type { LiveSocket } from './live';
import type { Me } from './session';

/** Builders and fakes for specs of stores and screens. No screen imports this file. */

export const NOW = Date.UTC(2026, 8, 3, 6, 15);
export const STORM_ID = '11111111-1111-4111-8111-111111111111';

export const idOf = (n: number): string => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;

export function aMe(role: Role = 'dispatcher', user: Partial<Me['user']> = {}): Me {
  return {
    user: {
      id: idOf(1),
      name: 'Ana Ruiz',
      signInName: 'ana@example.com',
      role,
      technicianId: role === 'technician' ? idOf(2) : null,
      disabled: false,
      mustChangePassword: false,
      version: 1,
      ...user,
    },
    storm: aStorm(),
    region: {
      id: 'demo',
      name: 'Demo County',
      bbox: [-40.5, 33.5, -39.5, 34.5],
      centre: [-40, 34],
      timeZone: 'America/New_York',
      attribution: 'Invented',
      tilesUrl: '/tiles/demo/{z}/{x}/{y}.mvt',
      houseNumbersUrl: null,
      hasCoast: true,
      addressCount: 20_000,
      towns: [],
    },
    settings: {
      companyName: 'Harbor Appliance Repair',
      companyPhone: '+12525550100',
      etaMovedMinutes: 15,
      quietFromMinute: 1260,
      quietUntilMinute: 480,
      claimMinutes: 10,
      circuity: 1.4,
      speedMph: 30,
      morningPercent: 85,
      dayPercent: 95,
      eveningPercent: 85,
      nightPercent: 100,
      stormPercent: 85,
      usesMeasuredSpeeds: false,
      measuredFrom: null,
      serviceMinutes: 45,
      furtherUnitPercent: 60,
      usesMeasuredVisits: false,
      shopPlace: null,
      shopMinutes: 10,
      driveDollarsPerHour: 40,
      waitDollarsPerHour: 2,
      lateDollars: 30,
      lateDollarsPerHour: 60,
      overtimeDollarsPerHour: 90,
      mostOvertimeMinutes: 60,
      leftOutDollars: 150,
      otherTechnicianDollars: 15,
      otherTimeDollars: 10,
      otherTimeMinutes: 30,
      promisedAheadMinutes: 120,
      medicineWeight: 5,
      changesPerHour: 6,
      automaticRoutes: 'off',
      automaticGainDollars: 25,
      automaticKeepMinutes: 45,
      householdWeight: 1.5,
      reachMinutes: 60,
      valueFreshFood: 150,
      valueFreezerSection: 200,
      valueUprightFreezer: 300,
      valueChestFreezer: 400,
      valueMedicine: 300,
      valueStock: 4000,
      pocketKm: 1,
      pocketCalls: 3,
      version: 1,
    },
    serverNow: NOW,
  };
}

export const aStorm = (
  change: Partial<NonNullable<Me['storm']>> = {},
): NonNullable<Me['storm']> => ({
  id: STORM_ID,
  name: 'September ice',
  state: 'open',
  openedAt: NOW - 3_600_000,
  closedAt: null,
  version: 1,
  ...change,
});

export const aCallRow = (n: number, change: Partial<CallRow> = {}): CallRow => ({
  id: idOf(1000 + n),
  stormId: STORM_ID,
  number: n,
  state: 'waiting',
  version: 1,
  receivedAt: NOW - 60_000 * n,
  settledAt: null,
  name: `Household ${n}`,
  phone: `+1252555${String(100 + (n % 100)).padStart(4, '0')}`,
  address: {
    text: `${n} Tern Lane`,
    unitNo: '',
    lonLat: [-40, 34],
    kind: 'rooftop',
  },
  areaId: null,
  lostAt: NOW - 3_600_000,
  restoredAt: null,
  units: [
    {
      id: idOf(5000 + n),
      kind: 'refrigerator',
      compartments: [
        {
          kind: 'fresh-food',
          valueCents: 20_000,
          atRiskAt: NOW,
          earliestAt: NOW,
          likelyAt: NOW + 3_600_000 + n * 60_000,
          saveByAt: NOW + 3_600_000 + n * 60_000,
        },
      ],
    },
  ],
  skills: [],
  parts: [],
  claim: null,
  technicianId: null,
  etaAt: null,
  danger: false,
  householdAtRisk: false,
  unreadTexts: 0,
  cutOff: false,
  source: 'phone',
  ...change,
});

export const aTechnician = (n: number, change: Partial<TechnicianDto> = {}): TechnicianDto => ({
  id: idOf(2000 + n),
  name: `Technician ${n}`,
  phone: '+12525550150',
  skills: [],
  van: {},
  start: [-40, 34],
  shifts: [],
  position: null,
  active: true,
  version: 1,
  ...change,
});

export const aStop = (n: number, change: Partial<StopDto> = {}): StopDto => ({
  id: idOf(3000 + n),
  stormId: STORM_ID,
  technicianId: idOf(2001),
  callId: idOf(1000 + n),
  position: n,
  state: 'offered',
  locked: false,
  arriveAt: NOW + 1_800_000,
  finishAt: NOW + 4_500_000,
  etaAt: null,
  driveMinutes: 12,
  isUnreachable: false,
  because: 'Nearest with time to save the freezer',
  version: 1,
  ...change,
});

export const aBoard = (change: Partial<BoardPicture> = {}): BoardPicture => ({
  n: 10,
  serverNow: NOW,
  storm: aStorm(),
  calls: [aCallRow(1), aCallRow(2)],
  technicians: [aTechnician(1)],
  stops: [],
  areas: [],
  stormRoads: [],
  plan: null,
  automaticDone: null,
  ...change,
});

export const numbered = (n: number, change: BoardChange): Numbered<BoardChange> => ({
  stormId: STORM_ID,
  n,
  change,
});

export const callsChanged = (n: number, ...calls: CallRow[]): Numbered<BoardChange> =>
  numbered(n, { kind: 'calls', calls });

type Listener = (...args: unknown[]) => void;

/** Stands where the socket does: a spec announces, connects, cuts, and answers. */
export class FakeSocket {
  connected = false;
  active = false;
  /** What was asked for over the socket, in order. */
  readonly asked: { readonly event: string; readonly sent: unknown }[] = [];
  /** Gives the answer to a question, or a promise of it. */
  answer: (event: string, sent: unknown) => unknown = () => ({ kind: 'changes', changes: [] });

  private readonly listeners = new Map<string, Set<Listener>>();
  private readonly any = new Set<Listener>();
  readonly io = { on: () => this };

  on(event: string, heard: Listener): this {
    const set = this.listeners.get(event) ?? new Set<Listener>();
    this.listeners.set(event, set.add(heard));
    return this;
  }
  onAny(heard: Listener): this {
    this.any.add(heard);
    return this;
  }
  off(event?: string, heard?: Listener): this {
    if (event === undefined) this.listeners.clear();
    else if (heard) this.listeners.get(event)?.delete(heard);
    return this;
  }
  connect(): this {
    this.active = true;
    return this;
  }
  disconnect(): this {
    this.active = false;
    if (this.connected) this.cut('io client disconnect');
    return this;
  }
  timeout(): { emitWithAck: (event: string, sent: unknown) => Promise<unknown> } {
    return {
      emitWithAck: async (event, sent) => {
        this.asked.push({ event, sent });
        return await this.answer(event, sent);
      },
    };
  }

  /** The connection comes up. */
  up(): void {
    this.connected = true;
    this.hear('connect');
  }
  /** The connection breaks. */
  cut(reason = 'transport close'): void {
    this.connected = false;
    this.hear('disconnect', reason);
  }
  /** The server announces something. */
  announce<E extends keyof ServerEvents>(event: E, ...args: Parameters<ServerEvents[E]>): void {
    for (const heard of this.any) heard(event, ...args);
    this.hear(event, ...args);
  }

  asSocket(): LiveSocket {
    return this as unknown as LiveSocket;
  }

  private hear(event: string, ...args: unknown[]): void {
    for (const heard of [...(this.listeners.get(event) ?? [])]) heard(...args);
  }
}

/** Lets promise chains that are already under way come to their end. */
export const settled = (): Promise<void> => new Promise((done) => setTimeout(done));
