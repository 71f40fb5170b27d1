import { fetchesOn, loaded, type SuppliedStop } from '@shared/domain/fetch-parts';
import { MINUTE_MS } from '@shared/domain/instant';
import {
  learnedService,
  serviceMinutesOf,
  visitFault,
  type MeasuredVisit,
} from '@shared/domain/service-times';
import { breaksDue, breaksFault } from '@shared/domain/shift-breaks';

const NOON = Date.UTC(2026, 9, 3, 12);
const at = (minutes: number): number => NOON + minutes * MINUTE_MS;

describe('breaksDue', () => {
  const lunch = { from: at(0), to: at(120), minutes: 30 };
  const due = (now: number, ...work: [number, number][]): number =>
    breaksDue(
      [lunch],
      at(-240),
      work.map(([from, to]) => ({ from: at(from), to: at(to) })),
      at(now),
    ).length;

  it.each([
    { now: -5, work: [], due: 1, why: 'its time has not come' },
    { now: 20, work: [], due: 1, why: 'twenty minutes of it are over' },
    { now: 30, work: [], due: 0, why: 'the technician has had half an hour' },
    {
      now: 60,
      work: [
        [-30, 20],
        [40, 60],
      ],
      due: 1,
      why: 'the gap was too short',
    },
    {
      now: 90,
      work: [
        [-30, 20],
        [50, 90],
      ],
      due: 0,
      why: 'the gap was long enough',
    },
    { now: 90, work: [[-30, 90]], due: 1, why: 'work went on' },
  ] as { now: number; work: [number, number][]; due: number; why: string }[])(
    'has $due left at $now min when $why',
    ({ now, work, due: left }) => expect(due(now, ...work)).toBe(left),
  );
});

describe('breaksFault', () => {
  const shift = { startsAt: at(-240), endsAt: at(240) };
  it('lets breaks lie within their shift, one after the other', () => {
    const [early, late] = [
      { from: at(-120), to: at(-60), minutes: 15 },
      { from: at(0), to: at(60), minutes: 30 },
    ];
    expect(breaksFault(shift, [late, early])).toBeNull();
    expect(breaksFault(shift, [early, { ...late, from: at(-50) }])).toMatch(/overlap/);
    expect(breaksFault(shift, [{ ...late, to: at(215) }])).toMatch(/within its shift/);
  });
});

describe('learnedService', () => {
  const SETTINGS = { serviceMinutes: 40, furtherUnitPercent: 50 };
  const visit = (minutes: number, told: Partial<MeasuredVisit> = {}): MeasuredVisit => ({
    technicianId: 'theo',
    cause: 'starter',
    units: 1,
    arrivedAt: NOON,
    endedAt: at(minutes),
    hadAccess: true,
    ...told,
  });
  const many = (count: number, minutes: number, told: Partial<MeasuredVisit> = {}) =>
    Array.from({ length: count }, () => visit(minutes, told));
  const minutesOf = (
    visits: MeasuredVisit[],
    cause: string | null,
    units = 1,
    technicianId = 'ilse',
  ) => serviceMinutesOf({ cause, units, technicianId }, SETTINGS, learnedService(visits, SETTINGS));

  it('plans what the settings say while nothing is known, and each further unit at its share', () => {
    expect([1, 2, 3].map((units) => minutesOf([], null, units))).toEqual([40, 60, 80]);
  });

  it('moves half way after as many visits as it believes in beforehand', () => {
    // 8 visits of 60 min where 40 were expected: (8 × 1 + 8 × 1.5) / 16 = 1.25.
    expect(learnedService(many(8, 60), SETTINGS).all).toEqual({ visits: 8, factor: 1.25 });
    expect(minutesOf(many(8, 60), null)).toBe(50);
  });

  it('does not take a technician with the hard causes for a slow one', () => {
    const visits = [
      ...many(40, 80, { cause: 'compressor', technicianId: 'theo' }),
      ...many(40, 80, { cause: 'compressor', technicianId: 'ilse' }),
      ...many(40, 40, { cause: 'starter', technicianId: 'ilse' }),
    ];
    const { byTechnician } = learnedService(visits, SETTINGS);
    const [theo, ilse] = ['theo', 'ilse'].map((id) => byTechnician.get(id)!.factor);
    expect(theo! / ilse!).toBeLessThan(1.15);
    expect(minutesOf(visits, 'compressor')).toBeGreaterThan(minutesOf(visits, 'starter') + 20);
  });

  it('is bounded, whatever the visits say, and one odd visit counts for little', () => {
    expect(minutesOf(many(500, 299), 'starter')).toBeLessThanOrEqual(40 * 2 * 1.35);
    expect(minutesOf(many(500, 6), 'starter')).toBeGreaterThanOrEqual(40 * 0.5 * 0.75);
    const [calm, odd] = [many(20, 40), [...many(19, 40), visit(299)]];
    expect(minutesOf(odd, null) - minutesOf(calm, null)).toBeLessThanOrEqual(4);
  });

  it('is the same in any order of the visits', () => {
    const visits = [31, 47, 53, 61, 33, 90].map((minutes, i) =>
      visit(minutes, {
        cause: i % 2 ? 'starter' : 'defrost',
        technicianId: i % 3 ? 'theo' : 'ilse',
      }),
    );
    const text = (all: MeasuredVisit[]) => {
      const { all: one, byCause, byTechnician } = learnedService(all, SETTINGS);
      return JSON.stringify([one, [...byCause].sort(), [...byTechnician].sort()]);
    };
    expect(text([...visits].reverse())).toBe(text(visits));
  });

  it('leaves out what tells nothing', () => {
    expect(visitFault(visit(40))).toBeNull();
    for (const odd of [visit(4), visit(301), visit(40, { hadAccess: false })])
      expect(visitFault(odd)).not.toBeNull();
    expect(learnedService([visit(4), visit(6 * 60)], SETTINGS).visits).toBe(0);
  });
});

describe('fetchesOn', () => {
  const stop = (needs: SuppliedStop['needs'], told: Partial<SuppliedStop> = {}): SuppliedStop => ({
    state: 'planned',
    locked: false,
    needs,
    fetches: null,
    ...told,
  });

  it('fetches nothing that is on the van', () => {
    expect(fetchesOn([stop(['overload']), stop(['overload'])], { overload: 2 })).toEqual([
      null,
      null,
    ]);
  });

  it('fetches once, before the first visit that lacks a part, all that is lacking from there on', () => {
    expect(
      fetchesOn(
        [
          stop(['overload']),
          stop(['overload', 'start-relay']),
          stop(['power-cord']),
          stop(['overload']),
        ],
        { overload: 1 },
      ),
    ).toEqual([null, { overload: 2, 'start-relay': 1, 'power-cord': 1 }, null, null]);
  });

  it('keeps the earlier stop that a plan has chosen', () => {
    const chosen = stop([], { fetches: { overload: 9 } });
    expect(fetchesOn([chosen, stop(['overload'])], {})).toEqual([{ overload: 1 }, null]);
    expect(fetchesOn([stop(['overload']), chosen], {})).toEqual([{ overload: 1 }, null]);
  });

  it('sends nobody away from a stop that they accepted, and counts what is being fetched', () => {
    const accepted = stop(['overload'], { state: 'accepted' });
    expect(fetchesOn([accepted, stop(['overload'])], {})).toEqual([null, { overload: 1 }]);
    const onTheWay = stop(['overload'], { state: 'travelling', fetches: { overload: 2 } });
    expect(fetchesOn([onTheWay, stop(['overload'])], {})).toEqual([{ overload: 2 }, null]);
  });

  it('loads what was fetched', () => {
    expect(loaded({ overload: 1 }, { overload: 2, 'power-cord': 1 })).toEqual({
      overload: 3,
      'power-cord': 1,
    });
  });
});
