/** @jest-environment node */
import type { CompartmentKind } from '@shared/domain/cold-unit';
import { HOUR_MS } from '@shared/domain/instant';
import { saveVerdict, verdictShort, verdictWords } from './save-verdict';

const NOW = Date.UTC(2026, 8, 3, 12);
const at = (hours: number): number => NOW + hours * HOUR_MS;

const compartment = (kind: CompartmentKind, saveByHours: number | null, valueCents = 20_000) => ({
  kind,
  valueCents,
  atRiskAt: at(-1),
  saveByAt: saveByHours === null ? null : at(saveByHours),
});
const facts = (...compartments: ReturnType<typeof compartment>[]) => ({
  lostAt: at(-3),
  restoredAt: null,
  compartments,
});

describe('saveVerdict', () => {
  it('is in time when the visit ends before every save-by that is left', () => {
    const verdict = saveVerdict(
      facts(compartment('fresh-food', 1), compartment('freezer', 20)),
      at(0.5),
      NOW,
    );
    expect(verdict).toMatchObject({ kind: 'in-time', spareMs: 0.5 * HOUR_MS, savedCents: 40_000 });
    expect(verdict.next).toMatchObject({ kind: 'fresh-food', state: 'at-risk' });
    expect(verdictWords(verdict)).toBe('In time: 30 min before the save-by of fresh food');
  });

  it('counts the very moment of the save-by as too late', () => {
    expect(saveVerdict(facts(compartment('freezer', 1)), at(1), NOW).kind).toBe('too-late');
  });

  it('tells what a late visit still saves and what it misses', () => {
    const verdict = saveVerdict(
      facts(compartment('fresh-food', 1), compartment('freezer', 20, 30_000)),
      at(1.25),
      NOW,
    );
    expect(verdict).toMatchObject({ kind: 'part', savedCents: 30_000, missedCents: 20_000 });
    expect(verdict.next?.state).toBe('lost');
    expect(verdictWords(verdict)).toBe('Saves $300, too late for $200: fresh food by 15 min');
  });

  it('lets a compartment that is lost already count for nothing', () => {
    const verdict = saveVerdict(
      facts(compartment('fresh-food', -1), compartment('freezer', 20)),
      at(2),
      NOW,
    );
    expect(verdict).toMatchObject({ kind: 'in-time', missedCents: 0 });
    expect(verdict.next?.kind).toBe('freezer');
  });

  it('says so when nothing is left, and when no hour is published', () => {
    expect(saveVerdict(facts(compartment('freezer', -1)), at(2), NOW).kind).toBe('nothing-left');
    const undated = saveVerdict(facts(compartment('medicine', null)), at(2), NOW);
    expect(undated).toMatchObject({ kind: 'nothing-left', next: null });
  });

  it('spares the minutes when there are hours to spare', () => {
    const spare = (hours: number) =>
      verdictShort(saveVerdict(facts(compartment('freezer', hours)), NOW, NOW));
    expect(spare(9.5)).toBe('9 h 30');
    expect(spare(17.5)).toBe('17 h');
  });
});
