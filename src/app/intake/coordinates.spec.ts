/** @jest-environment node */
import { readCoordinates } from './coordinates';

describe('readCoordinates', () => {
  it.each([
    ['34.0512, -52.3001', [-52.3001, 34.0512]],
    ['34.0512 -52.3001', [-52.3001, 34.0512]],
    ['34.0512 N 52.3001 W', [-52.3001, 34.0512]],
    ['34.05°N, 52.3°W', [-52.3, 34.05]],
  ])('reads "%s" with the latitude first', (text, point) => {
    expect(readCoordinates(text)).toEqual(point);
  });

  it.each(['12 Tern Court', '100 12', '91.5, 20.5', '252 555 0142'])(
    'takes "%s" for no place on earth',
    (text) => {
      expect(readCoordinates(text)).toBeNull();
    },
  );
});
