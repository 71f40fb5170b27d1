/** @jest-environment node */
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { aStop, aTechnician, NOW } from '../core/testing';
import { duration } from '../core/zone';
import { arrowsOn } from './paint-routes';
import { initialsOf, proposedRoute, routeShape } from './route-shape';
import { Way } from './way';
import { toWorld } from './world';

describe('routeShape', () => {
  const PLACE: [number, number] = [-39.9, 34.1];
  const ground = { placeOf: () => PLACE, wayOf: () => null };

  it('tells how old the position is, and marks it once it says little', () => {
    const at = (minutes: number) =>
      routeShape(
        aTechnician(1, {
          position: { lonLat: [-40, 34], at: NOW - minutes * MINUTE_MS, accuracyMeters: null },
        }),
        [],
        ground,
        NOW,
        duration,
      );
    expect(at(4)).toMatchObject({ age: '4 min', isOld: false });
    expect(at(15)).toMatchObject({ isOld: false });
    expect(at(16)).toMatchObject({ age: '16 min', isOld: true });
    expect(at(190)).toMatchObject({ age: '3 h 10' });
  });

  it('begins at the start of the shift while no position is known', () => {
    const shape = routeShape(aTechnician(1, { start: [-41, 35] }), [], ground, NOW, duration);
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
      { ...ground, placeOf: (callId) => (callId === stops[1]!.callId ? null : PLACE) },
      NOW,
      duration,
    );
    expect(shape.legs.map(({ order, isFirm }) => [order, isFirm])).toEqual([
      [1, true],
      [3, false],
    ]);
  });
});

describe('the ways of a route', () => {
  const places = new Map<string, [number, number]>([
    ['a', [-39.9, 34.1]],
    ['b', [-39.8, 34.2]],
  ]);
  const ground = {
    placeOf: (callId: string) => places.get(callId) ?? null,
    wayOf: (from: [number, number], to: [number, number]) =>
      to[0] === -39.8 ? new Way([from, [from[0], to[1]], to]) : null,
  };
  const stop = (callId: string, firm: boolean) => ({
    callId,
    arriveAt: NOW,
    startAt: NOW,
    finishAt: NOW,
    driveMinutes: 5,
    firm,
    because: '',
  });

  it('go from stop to stop, along the roads where they are known', () => {
    const technician = aTechnician(1, { start: [-40, 34] });
    const { legs } = proposedRoute(
      technician,
      { technicianId: technician.id, stops: [stop('a', true), stop('x', false), stop('b', false)] },
      ground,
    );
    expect(legs.map(({ from, way, isFirm }) => [from, way === null, isFirm])).toEqual([
      [toWorld([-40, 34]), true, true],
      [toWorld([-39.9, 34.1]), false, false],
    ]);
    expect(legs[1]!.way!.at(16)).toHaveLength(3);
  });

  it('lose the points that nobody can tell apart from afar', () => {
    const line = Array.from({ length: 50 }, (_, i): [number, number] => [
      -40 + i * 1e-4,
      34 + (i % 2) * 1e-5,
    ]);
    const way = new Way(line);
    expect(way.at(9)).toHaveLength(2);
    expect(way.at(19).length).toBeGreaterThan(40);
  });
});

describe('arrowsOn', () => {
  const view = { zoom: 13, scale: 1, left: 0, top: 0, width: 500, height: 500, margin: 0 };

  it('point the way the line goes, one on a short line and more along a long one', () => {
    const corner = [
      { x: 0, y: 100 },
      { x: 100, y: 100 },
      { x: 100, y: 300 },
    ];
    const arrows = arrowsOn(view, [corner], 150);
    expect(arrows).toHaveLength(2);
    expect(arrows[0]).toMatchObject({ x: 75, y: 100, angle: 0 });
    expect(arrows[1]).toMatchObject({ x: 100, y: 225, angle: Math.PI / 2 });
    expect(arrowsOn(view, [corner.slice(0, 2)], 150)).toHaveLength(1);
  });

  it('are left out on lines too short for one, and beyond the canvas', () => {
    expect(
      arrowsOn(
        view,
        [
          [
            { x: 0, y: 0 },
            { x: 20, y: 0 },
          ],
        ],
        100,
      ),
    ).toEqual([]);
    expect(
      arrowsOn(
        view,
        [
          [
            { x: 900, y: 0 },
            { x: 999, y: 0 },
          ],
        ],
        100,
      ),
    ).toEqual([]);
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
