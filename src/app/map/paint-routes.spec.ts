import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { aStop, aTechnician, NOW } from '../core/testing';
import { duration } from '../core/zone';
import { initialsOf, routeShape } from './paint-routes';
import { toWorld } from './world';

describe('routeShape', () => {
  const placeOf = () => toWorld([-39.9, 34.1]);

  it('tells how old the position is, and marks it once it says little', () => {
    const at = (minutes: number) =>
      routeShape(
        aTechnician(1, {
          position: { lonLat: [-40, 34], at: NOW - minutes * MINUTE_MS, accuracyMeters: null },
        }),
        [],
        placeOf,
        NOW,
        duration,
      );
    expect(at(4)).toMatchObject({ age: '4 min', isOld: false });
    expect(at(15)).toMatchObject({ isOld: false });
    expect(at(16)).toMatchObject({ age: '16 min', isOld: true });
    expect(at(190)).toMatchObject({ age: '3 h 10' });
  });

  it('begins at the start of the shift while no position is known', () => {
    const shape = routeShape(aTechnician(1, { start: [-41, 35] }), [], placeOf, NOW, duration);
    expect(shape).toMatchObject({ at: toWorld([-41, 35]), age: '', isOld: true });
  });

  it('keeps the order of the stops, passes over those without a place and knows which are firm', () => {
    const stops = [
      aStop(0, { state: 'travelling' }),
      aStop(1, { state: 'accepted' }),
      aStop(2, { state: 'planned', etaAt: NOW + HOUR_MS }),
    ];
    const shape = routeShape(
      aTechnician(1),
      stops,
      (callId) => (callId === stops[1]!.callId ? null : placeOf()),
      NOW,
      duration,
    );
    expect(shape.legs.map(({ order, isFirm }) => [order, isFirm])).toEqual([
      [1, true],
      [3, false],
    ]);
  });
});

describe('initialsOf', () => {
  it.each([
    ['Ana Ruiz', 'AR'],
    ['jo', 'J'],
    ['Åsa Maria Öst', 'ÅÖ'],
    ['', ''],
  ])('makes of %p: %p', (name, initials) => {
    expect(initialsOf(name)).toBe(initials);
  });
});
