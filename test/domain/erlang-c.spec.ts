import fc from 'fast-check';
import { answeredWithin, erlangC, phoneService } from '@shared/domain/forecast/erlang-c';
import { phoneStaffing } from '@shared/domain/forecast/phone-staffing';

describe('Erlang C', () => {
  it('answers the worked example of 360 calls in half an hour, 4 minutes each, 55 people', () => {
    // "The Erlang-C Formula" (mitan.co.uk, about 2000): inputs and the steps as printed there; the results
    // to these digits by the formula, computed apart from this code.
    const callsPerHour = 720;
    expect((callsPerHour * 4) / 60).toBe(48);
    expect(erlangC(48, 55)).toBeCloseTo(0.2387, 4);
    expect(answeredWithin(15, callsPerHour, 4, 55)).toBeCloseTo(0.8459, 4);
    expect(phoneService(callsPerHour, 4, 55).meanWaitSeconds).toBeCloseTo(8.18, 2);
  });

  it('answers the textbook’s 3 servers, 300 customers a year, 2 days each', () => {
    // Bronson, "Schaum's Outline of Operations Research", 2nd ed., 1997, problem 24.6, as printed in a
    // university's notes: Lq 0.352, Wq 0.43 days, W 2.429 days.
    const service = phoneService(300 / 365 / 24, 2 * 24 * 60, 3);
    const days = service.meanWaitSeconds! / 86_400;
    expect(days).toBeCloseTo(0.429, 3);
    expect((days * 300) / 365).toBeCloseTo(0.352, 3);
    expect(days + 2).toBeCloseTo(2.429, 3);
  });

  it.each([
    // A hospital with patients 2 an hour and 3 an hour per doctor: a textbook case, from memory.
    [1, 0.6667, 2400],
    [2, 0.1667, 150],
  ])('knows the hospital with %d doctors', (doctors, waits, seconds) => {
    const { waitChance, meanWaitSeconds } = phoneService(2, 20, doctors);
    expect(waitChance).toBeCloseTo(waits, 4);
    expect(meanWaitSeconds).toBeCloseTo(seconds, 6);
  });

  it.each([
    // 100 calls in half an hour, 3 minutes each, answered within 20 s: the classic table, by the formula.
    [12, 0.4494, 0.64, 40.4],
    [13, 0.2853, 0.796, 17.1],
    [14, 0.1741, 0.888, 7.84],
  ])('knows the classic table at %d people', (people, waits, within, seconds) => {
    expect(erlangC(10, people)).toBeCloseTo(waits, 4);
    expect(answeredWithin(20, 200, 3, people)).toBeCloseTo(within, 3);
    expect(phoneService(200, 3, people).meanWaitSeconds! / seconds).toBeCloseTo(1, 2);
  });

  it('says that the line grows while the load is no less than the people', () => {
    expect(phoneService(60, 10, 10)).toEqual({
      occupancy: 1,
      waitChance: 1,
      meanWaitSeconds: null,
    });
    expect(answeredWithin(60, 60, 10, 10)).toBe(0);
  });

  it('stays a chance for loads at which factorials overflow', () => {
    expect(erlangC(10_000, 10_100)).toBeGreaterThan(0.1);
    expect(erlangC(10_000, 10_100)).toBeLessThan(0.3);
    expect(erlangC(5, 5_000)).toBe(0);
    fc.assert(
      fc.property(fc.double({ min: 0, max: 50_000, noNaN: true }), fc.nat(400), (load, more) => {
        const chance = erlangC(load, Math.floor(load) + 1 + more);
        expect(chance).toBeGreaterThanOrEqual(0);
        expect(chance).toBeLessThanOrEqual(1);
      }),
      { numRuns: 60 },
    );
  });

  it('is helped by everyone who comes', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.1, max: 200, noNaN: true }), fc.nat(30), (load, more) => {
        const staff = Math.ceil(load) + more;
        expect(erlangC(load, staff + 1)).toBeLessThanOrEqual(erlangC(load, staff));
      }),
    );
  });
});

describe('phoneStaffing', () => {
  it('shows the people there are, and from one too few on', () => {
    // 40 calls an hour of 6 minutes are a load of 4.
    const rows = phoneStaffing(40, 60, 6, 2);
    expect(rows.map(({ staff }) => staff)).toEqual([2, 4, 5, 6, 7, 8, 9, 10]);
    expect(rows[1]).toMatchObject({ waitSeconds: null, within60: 0 });
    // The small storm desk by the formula: 5 people 199.5 s and 53.1 % within a minute.
    expect(rows[2]!.waitSeconds).toBeCloseTo(199.5, 1);
    expect(rows[2]!.within60).toBeCloseTo(0.531, 3);
    // At 60 an hour the load is 6.
    expect(rows.map(({ busyWaitSeconds }) => busyWaitSeconds === null)).toEqual([
      true,
      true,
      true,
      true,
      false,
      false,
      false,
      false,
    ]);
  });
});
