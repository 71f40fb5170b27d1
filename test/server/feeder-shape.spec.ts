import type { FeederDto, FeederMap } from '@shared/contract/feeders';
import { crossesItself, isInShape, MOST_SHAPE_POINTS } from '@shared/domain/outage-shape';
import { shapeOfFeeders } from '../../server/areas/feeder-shape';

const square = (west: number, south: number, size: number): [number, number][] => [
  [west, south],
  [west + size, south],
  [west + size, south + size],
  [west, south + size],
  [west, south],
];
const feeder = (id: string, polygons: FeederDto['polygons']): FeederDto => ({
  id,
  name: `Heron ${id}`,
  substation: 'Heron',
  customers: 10,
  polygons,
  trunk: [],
  wave: null,
});
const mapOf = (...feeders: FeederDto[]): FeederMap => ({ feeders, substations: [] });

describe('the ground of feeders', () => {
  it('has no border between neighbours', () => {
    const power = mapOf(feeder('1', [[square(0, 0, 1)]]), feeder('2', [[square(1, 0, 1)]]));
    const shape = shapeOfFeeders(power, ['1', '2']);
    expect(shape).toHaveLength(1);
    expect(shape[0]).toHaveLength(1);
    expect(shape[0]![0]!.length).toBeLessThanOrEqual(7);
    expect(isInShape([1, 0.5], shape)).toBe(true);
  });

  it('keeps parts that do not touch, and the hole that a ring of feeders leaves', () => {
    const around = [
      [0, 0],
      [1, 0],
      [2, 0],
      [0, 1],
      [2, 1],
      [0, 2],
      [1, 2],
      [2, 2],
      [9, 9],
    ].map(([x = 0, y = 0], i) => feeder(String(i), [[square(x, y, 1)]]));
    const shape = shapeOfFeeders(
      mapOf(...around),
      around.map(({ id }) => id),
    );
    expect(shape.map((rings) => rings.length).sort()).toEqual([1, 2]);
    expect(isInShape([1.5, 1.5], shape)).toBe(false);
    expect(isInShape([0.5, 1.5], shape)).toBe(true);
    expect(isInShape([9.5, 9.5], shape)).toBe(true);
  });

  it('is thinned to what an area may have', () => {
    const corners = Array.from({ length: 9000 }, (_, i): [number, number] => {
      const angle = (2 * Math.PI * i) / 9000;
      const reach = 0.1 + (i % 2) * 2e-6;
      return [Math.cos(angle) * reach, Math.sin(angle) * reach];
    });
    const shape = shapeOfFeeders(mapOf(feeder('1', [[[...corners, corners[0]!]]])), ['1']);
    const points = shape.flat().reduce((sum, ring) => sum + ring.length, 0);
    expect(points).toBeLessThanOrEqual(MOST_SHAPE_POINTS);
    expect(shape.some((rings) => crossesItself(rings))).toBe(false);
    expect(isInShape([0.09, 0], shape)).toBe(true);
    expect(isInShape([0.11, 0], shape)).toBe(false);
  });

  it('of an unknown feeder is refused', () => {
    expect(() => shapeOfFeeders(mapOf(), ['7'])).toThrow('The region has no feeder 7.');
  });
});
