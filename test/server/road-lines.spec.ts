import type { LonLat } from '@shared/contract/common';
import { RoadLinesQuery } from '@shared/contract/road-lines';
import { USUAL_CONDITIONS } from '@shared/domain/roads/conditions';
import { roadLines } from '../../server/areas/road-lines';
import type { RoadsPort } from '../../server/workers/ports';

const [A, B, C, ISLAND]: [LonLat, LonLat, LonLat, LonLat] = [
  [0, 0],
  [0, 1],
  [1, 1],
  [9, 9],
];

/** Roads that bend once between any two places, but for the island. */
function bentRoads() {
  const asked: LonLat[][] = [];
  const port = {
    followed: { ...USUAL_CONDITIONS },
    path: (stops: LonLat[]) => {
      asked.push(stops);
      return Promise.resolve(
        stops.slice(1).map((to, i) => {
          const from = stops[i] ?? to;
          if (to === ISLAND || from === ISLAND) return null;
          return { line: [from, [from[0] + 0.5, to[1] + 0.5], to], seconds: 1, metres: 1 };
        }),
      );
    },
  };
  return { asked, port: port as unknown as RoadsPort & { followed: object } };
}

describe('roadLines', () => {
  it('asks for drives that follow on each other at once, and for each only once', async () => {
    const { asked, port } = bentRoads();
    const drives: [LonLat, LonLat][] = [
      [A, B],
      [B, C],
      [A, C],
    ];
    const lines = await roadLines(port, drives);
    expect(asked).toEqual([
      [A, B, C],
      [A, C],
    ]);
    expect(lines[1]).toEqual([B, [0.5, 1.5], C]);
    expect(await roadLines(port, drives)).toEqual(lines);
    expect(asked).toHaveLength(2);
  });

  it('has no line where no road leads, and none in a region without roads', async () => {
    expect(await roadLines(bentRoads().port, [[A, ISLAND]])).toEqual([null]);
    expect(await roadLines(null, [[A, B]])).toEqual([null]);
  });

  it('asks again once other conditions are followed', async () => {
    const { asked, port } = bentRoads();
    await roadLines(port, [[A, B]]);
    port.followed = { ...USUAL_CONDITIONS };
    await roadLines(port, [[A, B]]);
    expect(asked).toHaveLength(2);
  });
});

describe('the question', () => {
  const read = (drives: string) => RoadLinesQuery.safeParse({ drives });

  it('is read as pairs of places', () => {
    expect(read('-40,34,-40.5,34.25;1,2,3,4').data?.drives).toEqual([
      [
        [-40, 34],
        [-40.5, 34.25],
      ],
      [
        [1, 2],
        [3, 4],
      ],
    ]);
  });

  it.each(['', '1,2,3', '1,2,3,x', '1,2,3,99', Array(41).fill('1,2,3,4').join(';')])(
    'is refused as %p',
    (drives) => {
      expect(read(drives).success).toBe(false);
    },
  );
});
