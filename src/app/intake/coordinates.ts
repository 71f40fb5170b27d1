import type { LonLat } from '@shared/contract/common';

const DEGREES = String.raw`([+-]?\d{1,3}(?:\.\d+)?)\s*°?\s*`;
const PLAIN = new RegExp(`^${DEGREES}[,;\\s]\\s*${DEGREES}$`);
const LETTERED = new RegExp(`^${DEGREES}([ns])[,;\\s]*${DEGREES}([ew])$`, 'i');

/** Reads "35.1234, -76.5432" or "35.1234 N 76.5432 W": latitude first, as phones show it. */
export function readCoordinates(text: string): LonLat | null {
  const lettered = LETTERED.exec(text.trim());
  if (lettered) {
    const [, lat, northSouth, lon, eastWest] = lettered;
    return within(
      Number(lon) * (/w/i.test(eastWest ?? '') ? -1 : 1),
      Number(lat) * (/s/i.test(northSouth ?? '') ? -1 : 1),
    );
  }
  const plain = PLAIN.exec(text.trim());
  // Two whole numbers are more likely a house number and a route than a place on earth.
  if (!plain || !`${plain[1]}${plain[2]}`.includes('.')) return null;
  return within(Number(plain[2]), Number(plain[1]));
}

const within = (lon: number, lat: number): LonLat | null =>
  Math.abs(lon) <= 180 && Math.abs(lat) <= 85 ? [lon, lat] : null;
