/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import {
  FOLD_SHARE,
  lanesByKind,
  lanesOfEach,
  nextSaveBy,
  NOW_SHARE,
  RULER_HOURS,
  shareOf,
  shareOfHours,
  type StripFacts,
} from './cold-strip-scale';
import { stripWords } from './cold-strip-words';

const NOW = Date.UTC(2026, 8, 3, 6, 0);
const at = (hours: number) => NOW + hours * HOUR_MS;
/** Hours from now in words, so that expectations do not depend on a zone. */
const clock = (moment: number) =>
  `${(moment - NOW) / HOUR_MS >= 0 ? '+' : ''}${(moment - NOW) / HOUR_MS}`;

/** A fridge-freezer whose power went three hours ago. */
const facts: StripFacts = {
  lostAt: at(-3),
  restoredAt: null,
  compartments: [
    { kind: 'freezer', atRiskAt: at(15), saveByAt: at(21) },
    { kind: 'fresh-food', atRiskAt: at(0), saveByAt: at(1) },
  ],
};

describe('shareOfHours', () => {
  it('puts now, the fold and both ends where every ruler has them', () => {
    expect(shareOfHours(0)).toBe(NOW_SHARE);
    expect(shareOfHours(12)).toBe(FOLD_SHARE);
    expect(shareOfHours(-8)).toBe(0);
    expect(shareOfHours(48)).toBe(1);
  });

  it('keeps what lies outside the ruler at its ends', () => {
    expect(shareOfHours(-100)).toBe(0);
    expect(shareOfHours(672)).toBe(1);
  });

  it('is even between two folds', () => {
    // Six hours are half of the first twelve, thirty are half-way from 12 to 48.
    expect(shareOfHours(6)).toBeCloseTo((NOW_SHARE + FOLD_SHARE) / 2, 12);
    expect(shareOfHours(30)).toBeCloseTo((FOLD_SHARE + 1) / 2, 12);
  });

  it('never puts a later hour to the left of an earlier one', () => {
    const shares = Array.from({ length: 600 }, (_, i) => shareOfHours(-10 + i / 10));
    expect(shares).toEqual([...shares].sort((a, b) => a - b));
    const marks = RULER_HOURS.map(shareOfHours);
    expect(new Set(marks).size).toBe(RULER_HOURS.length);
  });

  it('moves a save-by to the left as the night goes on', () => {
    expect(shareOf(at(5), at(1))).toBeLessThan(shareOf(at(5), at(0)));
  });
});

describe('lanesByKind', () => {
  it('gives each kind a lane in the same order whatever the order of the units', () => {
    const backwards = { ...facts, compartments: [...facts.compartments].reverse() };
    expect(lanesByKind(facts, NOW).map((lane) => lane.kind)).toEqual(['fresh-food', 'freezer']);
    expect(lanesByKind(backwards, NOW)).toEqual(lanesByKind(facts, NOW));
  });

  it('draws the cold line, the span at risk and the tick one after the other', () => {
    const [, freezer] = lanesByKind(facts, NOW);
    expect(freezer).toMatchObject({
      state: 'still-safe',
      coldFrom: shareOfHours(-3),
      coldTo: shareOfHours(15),
      riskFrom: shareOfHours(15),
      riskTo: shareOfHours(21),
      tick: shareOfHours(21),
      beyond: null,
    });
  });

  it('marks the moment from which contents are likely warm, where it is told apart', () => {
    const [freezer] = facts.compartments;
    const laneWith = (likelyAt: number, now = NOW) =>
      lanesByKind({ ...facts, compartments: [{ ...freezer!, likelyAt }] }, now)[0];
    expect(laneWith(at(12))).toMatchObject({ likelyAt: at(12), likely: shareOfHours(12) });
    expect(laneWith(at(20.9))).toMatchObject({ likelyAt: null, likely: null });
    expect(laneWith(at(12), at(21))).toMatchObject({ state: 'lost', likelyAt: null });
  });

  it('counts the moment of the save-by itself as lost', () => {
    expect(lanesByKind(facts, at(1) - 1)[0]?.state).toBe('at-risk');
    expect(lanesByKind(facts, at(1))[0]?.state).toBe('lost');
  });

  it('shows the compartment that is lost next, not one that is lost already', () => {
    const two: StripFacts = {
      ...facts,
      compartments: [
        { kind: 'freezer', atRiskAt: at(-2), saveByAt: at(-1) },
        { kind: 'freezer', atRiskAt: at(20), saveByAt: at(30) },
        { kind: 'freezer', atRiskAt: at(4), saveByAt: at(6) },
      ],
    };
    expect(lanesByKind(two, NOW)).toEqual([
      expect.objectContaining({ saveByAt: at(6), count: 3, state: 'still-safe' }),
    ]);
  });

  it('shows the one lost last when all are lost', () => {
    const lost: StripFacts = {
      ...facts,
      compartments: [
        { kind: 'fresh-food', atRiskAt: at(-7), saveByAt: at(-6) },
        { kind: 'fresh-food', atRiskAt: at(-3), saveByAt: at(-2) },
      ],
    };
    expect(lanesByKind(lost, NOW)[0]).toMatchObject({ saveByAt: at(-2), state: 'lost' });
  });

  it('draws no tick where no hour is published, and the span at risk stays open', () => {
    const quarantined: StripFacts = {
      ...facts,
      compartments: [{ kind: 'medicine', atRiskAt: at(-3), saveByAt: null }],
    };
    expect(lanesByKind(quarantined, NOW)[0]).toMatchObject({
      state: 'at-risk',
      tick: null,
      riskTo: 1,
      beyond: null,
    });
  });

  it('says on which side a save-by lies that the ruler cannot show', () => {
    const far: StripFacts = {
      ...facts,
      compartments: [
        { kind: 'medicine', atRiskAt: at(400), saveByAt: at(600) },
        { kind: 'fresh-food', atRiskAt: at(-13), saveByAt: at(-12) },
      ],
    };
    expect(lanesByKind(far, NOW).map((lane) => lane.beyond)).toEqual(['before', 'after']);
  });

  it('ends the line where cooling came back', () => {
    const back = lanesByKind({ ...facts, restoredAt: at(-1) }, NOW);
    expect(back.map((lane) => lane.state)).toEqual(['stopped', 'stopped']);
    expect(back[1]?.riskTo).toBe(shareOfHours(-1));
  });

  it('leaves a compartment lost that was lost before cooling came back', () => {
    const late = { ...facts, restoredAt: at(2) };
    expect(lanesByKind(late, at(3)).map((lane) => lane.state)).toEqual(['lost', 'stopped']);
  });
});

describe('lanesOfEach', () => {
  it('keeps every compartment apart, in the order of the units', () => {
    expect(lanesOfEach(facts, NOW).map((lane) => lane.kind)).toEqual(['freezer', 'fresh-food']);
  });
});

describe('nextSaveBy', () => {
  it('is the earliest that has not passed', () => {
    expect(nextSaveBy(facts, NOW)).toBe(at(1));
    expect(nextSaveBy(facts, at(1))).toBe(at(21));
  });

  it('is nothing once all is lost or cooling is back', () => {
    expect(nextSaveBy(facts, at(30))).toBeNull();
    expect(nextSaveBy({ ...facts, restoredAt: at(-1) }, NOW)).toBeNull();
  });
});

describe('stripWords', () => {
  it('says for each compartment what the picture shows', () => {
    expect(stripWords(lanesByKind(facts, NOW), NOW, clock)).toBe(
      'Fresh food: at risk, save by +1, in 1 h 00. Freezer: at risk from +15, save by +21, in 21 h 00.',
    );
  });

  it('says from when contents are likely warm, and still names the save-by', () => {
    const [freezer] = facts.compartments;
    const wordsAt = (now: number) =>
      stripWords(
        lanesByKind({ ...facts, compartments: [{ ...freezer!, likelyAt: at(12) }] }, now),
        now,
        clock,
      );
    expect(wordsAt(NOW)).toBe(
      'Freezer: at risk from +15, likely thawing from +12, save by +21, in 21 h 00.',
    );
    expect(wordsAt(at(16))).toBe(
      'Freezer: at risk, likely thawing by now, save by +21, in 5 h 00.',
    );
  });

  it('speaks of replacing medicine and never of throwing it away', () => {
    const medicine: StripFacts = {
      ...facts,
      compartments: [{ kind: 'medicine', atRiskAt: at(-3), saveByAt: at(-2) }],
    };
    expect(stripWords(lanesByKind(medicine, NOW), NOW, clock)).toBe(
      'Medicine: replace, its limit passed at -2, 2 h 00 ago.',
    );
  });
});
