import type { CompartmentFacts } from '@shared/domain/cold-unit';
import { compartmentState, thawClock, type ThawClock } from '@shared/domain/thaw/thaw-clock';
import { savableBy, urgency } from '@shared/domain/urgency';
import { aCompartment, aMedicine, at, hoursOf, lossUntil } from './thaw-facts';

/** Whole units with several compartments, as a dispatcher meets them. */
const shut72 = { door: 'shut', roomF: 72 } as const;
const FRESH_CENTS = 150_00;
const FREEZER_CENTS = 200_00;
const fresh = aCompartment('fresh-food', { ...shut72, valueCents: FRESH_CENTS });
const freezer = (fill: number) =>
  aCompartment('freezer', { ...shut72, fill, valueCents: FREEZER_CENTS });

function unitAfter(hours: number, ...facts: readonly CompartmentFacts[]) {
  const loss = lossUntil();
  const compartments = facts.map((known) => ({ facts: known, clock: thawClock(known, loss) }));
  return {
    states: compartments.map(({ clock }) => compartmentState(clock, loss, at(hours))),
    clocks: compartments.map(({ clock }) => hoursOf(clock)),
    urgency: urgency(compartments, loss, at(hours)),
    savedByVisitAt: (finish: number) => savableBy(compartments, loss, at(finish)),
  };
}

describe('a whole unit', () => {
  it('U1: lives on the clock of its freezer once the fresh food is lost', () => {
    const unit = unitAfter(6, fresh, freezer(1));
    expect(unit.states).toEqual(['lost', 'still-safe']);
    expect(unit.clocks).toEqual([
      { atRisk: 3, lost: 4 },
      { atRisk: 36, lost: 48 },
    ]);
    expect(unit.urgency).toMatchObject({
      lane: 3,
      slackMinutes: 42 * 60,
      valueAtRiskCents: FREEZER_CENTS,
    });
  });

  it('U2: is a phone matter for its fresh food and a visit for its freezer', () => {
    const unit = unitAfter(3, fresh, freezer(0.5));
    expect(unit.states).toEqual(['at-risk', 'still-safe']);
    expect(unit.urgency).toMatchObject({ lane: 2, slackMinutes: 60 });
    expect(hoursOf(thawClock(freezer(0.5), lossUntil())).lost! - 3).toBe(21);
    expect(unit.savedByVisitAt(5.5)).toBe(FREEZER_CENTS);
  });

  it('U4: a full chest is saved by a van that is there ten hours later, with eight to spare', () => {
    const unit = unitAfter(30, freezer(1));
    expect(unit.states).toEqual(['still-safe']);
    expect(unit.clocks).toEqual([{ atRisk: 36, lost: 48 }]);
    expect(unit.savedByVisitAt(40)).toBe(FREEZER_CENTS);
    expect(unit.urgency.slackMinutes! / 60 - 10).toBe(8);
  });

  it('U5: medicine with an unread label comes first, by phone', () => {
    const medicine = aMedicine({}, { roomF: 78 });
    const unit = unitAfter(5, { ...fresh, roomF: 78 }, medicine);
    expect(unit.states).toEqual(['lost', 'at-risk']);
    expect(unit.clocks[1]).toEqual({ atRisk: 2, lost: 24 });
    expect(unit.urgency.lane).toBe(1);
  });

  it('U7: insulin at 78 F is no medical urgency', () => {
    const insulin = aMedicine({ kind: 'insulin' }, { roomF: 78 });
    const unit = unitAfter(5, insulin);
    expect(unit.states).toEqual(['still-safe']);
    expect(unit.clocks).toEqual([{ atRisk: 504, lost: 672 }]);
    expect(unit.urgency.lane).not.toBe(1);
    // Far below a full freezer of the same value, although medicine weighs more.
    expect(unit.urgency.lossPerMinuteCents).toBeLessThan(
      unitAfter(5, { ...freezer(1), valueCents: insulin.valueCents }).urgency.lossPerMinuteCents,
    );
  });

  it('U8: a walk-in is not saved by the visit alone, and worth it after a cold log entry', () => {
    const walkIn = aCompartment('commercial-stock', { coldAtLoss: true, valueCents: 4_000_00 });
    const unit = unitAfter(1.5, walkIn);
    expect(unit.clocks).toEqual([{ atRisk: 2, lost: 4 }]);
    expect(unit.savedByVisitAt(4.5)).toBe(0);

    const logged = unitAfter(3, { ...walkIn, readings: [{ at: at(3), temperatureF: 40 }] });
    expect(logged.clocks[0]!.lost).toBe(7);
    expect(logged.savedByVisitAt(4.5)).toBe(4_000_00);
  });

  it('U10: power that came back to a dead refrigerator does not stop its clock', () => {
    // The mains were back after 2.5 h; cooling is not, so the loss goes on.
    const unit = unitAfter(3.5, fresh);
    expect(unit.states).toEqual(['at-risk']);
    expect(unit.urgency).toMatchObject({ lane: 2, slackMinutes: 30 });
  });

  it('U11: a small refrigerator of which nothing is known is at risk after 1.28 h', () => {
    const unit = unitAfter(2, aCompartment('fresh-food'));
    expect(unit.states).toEqual(['at-risk']);
    expect(unit.clocks).toEqual([{ atRisk: 1.28, lost: 4 }]);
  });
});

it('the clocks of a unit know nothing of one another', () => {
  const alone: ThawClock = thawClock(freezer(1), lossUntil());
  expect(unitAfter(1, fresh, freezer(1)).clocks[1]).toEqual(hoursOf(alone));
});
