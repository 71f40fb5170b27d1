/** @jest-environment node */
import { deserialize, serialize } from 'node:v8';
import { aCallRow, NOW } from '../../core/testing';
import { DEFAULT_WEIGHING, rankedCall } from '../../core/ranking';
import { callMark, type DrawnMark } from '../call-mark';
import { placeMarks } from '../mark-places';
import type { RouteShape } from '../route-shape';
import { Way } from '../way';
import { EMPTY_SCENE, type MapScene } from './map-scene';
import { packMarks, ScenePacker, SceneUnpacker, unpackMarks } from './packed-scene';

const MARKS = Array.from({ length: 40 }, (_, i) => {
  const call = aCallRow(i + 1, {
    address: { text: '', unitNo: '', lonLat: [-40 + i / 1000, 34], kind: 'rooftop' },
    danger: i % 5 === 0,
    technicianId: i % 3 === 0 ? 'theo' : null,
  });
  const mark = callMark(rankedCall(call, NOW, DEFAULT_WEIGHING), NOW);
  if (!mark) throw new Error('The call has a place.');
  return mark;
});

const aRoute = (way: Way | null, at = { x: 0.4, y: 0.4 }): RouteShape => ({
  technician: { id: 'theo' },
  at,
  initials: 'TL',
  age: '4 min',
  isOld: false,
  legs: [{ from: at, to: { x: 0.5, y: 0.5 }, way, isFirm: true, order: 1 }],
});

/** As a message to another thread does it: a structured clone, which jsdom has not. */
const cloned = <T>(value: T): T => deserialize(serialize(value)) as T;

function across(): (scene: MapScene) => { scene: MapScene<DrawnMark>; parts: string[] } {
  const packer = new ScenePacker();
  const unpacker = new SceneUnpacker(EMPTY_SCENE);
  return (scene) => {
    const changes = packer.changesTo(scene);
    return { scene: unpacker.take(cloned(changes)), parts: Object.keys(changes) };
  };
}

describe('a scene on its way to its thread', () => {
  it('brings every call as it was, in its order', () => {
    const arrived = unpackMarks(cloned(packMarks(MARKS)));
    expect(arrived).toEqual(
      MARKS.map(({ call: { number, danger }, ...mark }) => ({ ...mark, call: { number, danger } })),
    );
    // Those with room for a mark are the same ones.
    for (const zoom of [10, 13, 16])
      expect(placeMarks(arrived, zoom).map(({ isFull, count }) => [isFull, count])).toEqual(
        placeMarks(MARKS, zoom).map(({ isFull, count }) => [isFull, count]),
      );
  });

  it('sends what has changed, and leaves the rest as it is there', () => {
    const send = across();
    const first: MapScene = { ...EMPTY_SCENE, marks: MARKS, routes: [aRoute(null)] };
    expect(send(first).parts).toEqual(expect.arrayContaining(['marks', 'routes', 'areas']));
    const { scene, parts } = send({ ...first, chosenTechnicianId: 'theo', hasRoutes: true });
    for (const part of ['marks', 'routes', 'areas', 'pockets', 'ways'])
      expect(parts).not.toContain(part);
    expect(scene).toMatchObject({ chosenTechnicianId: 'theo', hasRoutes: true });
    expect(scene.marks).toHaveLength(MARKS.length);
    expect(scene.routes).toEqual(first.routes);
  });

  it('sends a way once, and again when it was out of use', () => {
    const send = across();
    const packer = new ScenePacker();
    const way = new Way([
      [-40, 34],
      [-39.99, 34.01],
      [-39.98, 34],
    ]);
    const withWay = (): MapScene => ({ ...EMPTY_SCENE, routes: [aRoute(way)] });
    const fresh = (scene: MapScene): number => packer.changesTo(scene).ways?.fresh.size ?? -1;
    expect([fresh(withWay()), fresh(withWay())]).toEqual([1, 0]);
    expect([fresh({ ...EMPTY_SCENE, routes: [] }), fresh(withWay())]).toEqual([0, 1]);

    for (let round = 0; round < 3; round++)
      expect(send(withWay()).scene.routes[0]?.legs[0]?.way?.at(15)).toEqual(way.at(15));
    expect(
      send({ ...EMPTY_SCENE, routes: [aRoute(null)] }).scene.routes[0]?.legs[0]?.way,
    ).toBeNull();
    expect(send(withWay()).scene.routes[0]?.legs[0]?.way?.line).toEqual(way.line);
  });
});
