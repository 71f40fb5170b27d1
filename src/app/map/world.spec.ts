/** @jest-environment node */
import {
  metresPerPixel,
  offScreen,
  onScreen,
  scaleAt,
  toLonLat,
  toWorld,
  type View,
} from './world';

describe('the web map projection', () => {
  it('puts the middle of the world in the middle and the date line at the edges', () => {
    expect(toWorld([0, 0])).toEqual({ x: 0.5, y: 0.5 });
    expect(toWorld([-180, 0]).x).toBe(0);
    expect(toWorld([180, 0]).x).toBe(1);
  });

  it('makes a square of the world up to its known northern edge', () => {
    // The latitude at which a Mercator map is square: atan(sinh(pi)).
    const edge = (Math.atan(Math.sinh(Math.PI)) * 180) / Math.PI;
    expect(toWorld([0, edge]).y).toBeCloseTo(0, 9);
    expect(toWorld([0, -edge]).y).toBeCloseTo(1, 9);
  });

  it('comes back to where it started, to a millionth of a degree', () => {
    for (const place of [
      [-47.7, 36.4],
      [0, 0],
      [179.9, -84],
    ] as const) {
      const [lon, lat] = toLonLat(toWorld(place));
      expect(lon).toBeCloseTo(place[0], 6);
      expect(lat).toBeCloseTo(place[1], 6);
    }
  });

  it('agrees with the published ground resolution at the equator', () => {
    // 156,543.03 m a pixel at zoom 0 for tiles of 256 pixels (OpenStreetMap wiki, "Zoom levels").
    expect(metresPerPixel(0, 0)).toBeCloseTo(156_543.03, 1);
    expect(metresPerPixel(60, 10)).toBeCloseTo(156_543.03 / 1024 / 2, 2);
  });

  it('finds on a canvas what it has put there', () => {
    const view: View = {
      zoom: 13,
      scale: scaleAt(13),
      left: 770_000,
      top: 820_000,
      width: 900,
      height: 700,
      margin: 80,
    };
    const place = toWorld([-47.71, 36.4]);
    const back = offScreen(view, onScreen(view, place));
    expect(back.x).toBeCloseTo(place.x, 12);
    expect(back.y).toBeCloseTo(place.y, 12);
  });
});
