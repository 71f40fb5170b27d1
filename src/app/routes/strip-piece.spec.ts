import { HOUR_MS } from '@shared/domain/instant';
import { stripPiece } from './strip-piece';

const NOON = Date.UTC(2026, 8, 3, 12);
const at = (hours: number): number => NOON + hours * HOUR_MS;
const ruler = { span: { from: NOON, to: at(10) }, pxPerHour: 100 };
const compartment = (
  kind: 'freezer' | 'fresh-food' | 'medicine',
  risk: number,
  saveBy: number,
) => ({
  kind,
  atRiskAt: at(risk),
  saveByAt: at(saveBy),
});
const facts = (...compartments: ReturnType<typeof compartment>[]) => ({
  lostAt: at(-2),
  restoredAt: null,
  compartments,
});
/** A visit from 13:00 to 14:00; the next stop begins at 14:30. */
const place = { x: 100, width: 100, nextX: 250 };
const piece = (...compartments: ReturnType<typeof compartment>[]) =>
  stripPiece(facts(...compartments), at(2), NOON, place, ruler);

describe('the piece of a cold strip over a visit', () => {
  it('turns from cold to at risk to lost where its moments lie on the ruler', () => {
    const { lanes, sign } = piece(compartment('freezer', 1.25, 1.75));
    expect(lanes).toEqual([{ kind: 'freezer', riskX: 25, lostX: 75 }]);
    expect(sign).toEqual({ kind: 'freezer', state: 'lost', x: 75, beyond: null });
  });

  it('goes on behind the visit to a save-by that is near, as far as the next stop', () => {
    expect(piece(compartment('freezer', 0.5, 2.2)).width).toBeCloseTo(128);
    const cut = piece(compartment('freezer', 0.5, 2.6));
    expect(cut.width).toBeCloseTo(147);
    expect(cut.sign).toMatchObject({ state: 'still-safe', beyond: 'after', x: 139 });
  });

  it('points to a save-by before the visit and far behind it', () => {
    expect(piece(compartment('freezer', 0.2, 0.5)).sign).toMatchObject({ x: 8, beyond: 'before' });
    expect(piece(compartment('freezer', 0.2, 9)).sign).toMatchObject({ x: 92, beyond: 'after' });
  });

  it('shows the contents that are lost next first, one lane a kind, and nothing that is lost now', () => {
    const { lanes, sign } = piece(
      compartment('fresh-food', -1.5, -0.5),
      compartment('freezer', 0.5, 5),
      compartment('freezer', 0.5, 4),
      compartment('medicine', 0.5, 3),
    );
    expect(lanes.map(({ kind }) => kind)).toEqual(['medicine', 'freezer']);
    expect(sign?.kind).toBe('medicine');
    expect(piece(compartment('fresh-food', -1.5, -0.5))).toEqual({
      width: 100,
      lanes: [],
      sign: null,
    });
  });
});
