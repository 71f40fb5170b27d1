import { greatCircleKm, greatCircleTableKm, type LonLat } from './great-circle';

/** How straight lines become drives while no road graph is at hand. */
export interface TravelSettings {
  /** Road distance divided by straight distance, 1 or more. */
  readonly circuity: number;
  /** Average speed door to door, in km/h. */
  readonly speedKmh: number;
  /** Seconds added to every drive for parking and walking to the door. */
  readonly stopSeconds: number;
}

/**
 * Circuity 1.35 lies between two published means and is meant for the hours after a storm:
 * - about 1.2 for random urban points: Newell 1980; O'Sullivan 1996, as quoted by Wikibooks,
 *   "Transportation Geography and Network Science: Circuity" (read in that quotation);
 * - 1.417 for US drives to hospitals: Boscoe, Henry & Zdeb, "A Nationwide Comparison of Driving
 *   Distance Versus Straight-Line Distance to Hospitals", Professional Geographer 64(2), 2012
 *   (the figure is from memory);
 * - 1.20 for the US: Ballou, Rahardja & Sakai, Transportation Research A 36(9), 2002 (from memory).
 * Closed roads are not in any of them, so an area may need its own factor.
 *
 * 40 km/h and two minutes a stop: our estimate, no source.
 */
export const DEFAULT_TRAVEL: TravelSettings = { circuity: 1.35, speedKmh: 40, stopSeconds: 120 };

/** Travel between places; Infinity where no way leads. */
export interface TravelTimes {
  /** Where the figures come from, in words for the screen. */
  readonly source: string;
  /** Kilometres driven from one place to the other. */
  distanceKm(from: LonLat, to: LonLat): number;
  /** Whole seconds for every pair, row-major: from × points.length + to. */
  matrix(points: readonly LonLat[]): Float64Array;
}

/** Drives as straight lines times the stated circuity. */
export function straightLineTravel(settings: Partial<TravelSettings> = {}): TravelTimes {
  const { circuity } = checked(settings);
  return {
    source: `Straight line × ${circuity}; no roads known`,
    distanceKm: (from, to) => greatCircleKm(from, to) * circuity,
    matrix: (points) => travelMatrix(points, settings),
  };
}

/**
 * Seconds from every place to every other, row-major.
 *
 * Rounded up to whole seconds: never shorter than the estimate, sums stay exact, and a detour is
 * still never shorter than the direct way.
 */
export function travelMatrix(
  points: readonly LonLat[],
  settings: Partial<TravelSettings> = {},
): Float64Array {
  const { circuity, speedKmh, stopSeconds } = checked(settings);
  const secondsPerKm = (circuity * 3600) / speedKmh;
  const table = greatCircleTableKm(points);
  for (let i = 0; i < table.length; i++) {
    const km = table[i]!;
    table[i] = km > 0 ? Math.ceil(km * secondsPerKm + stopSeconds) : 0;
  }
  return table;
}

function checked(settings: Partial<TravelSettings>): TravelSettings {
  const travel = { ...DEFAULT_TRAVEL, ...settings };
  if (!(travel.circuity >= 1)) throw new RangeError(`Circuity ${travel.circuity} is below 1.`);
  if (!(travel.speedKmh > 0)) throw new RangeError(`Speed ${travel.speedKmh} km/h is not a speed.`);
  if (!(travel.stopSeconds >= 0)) {
    throw new RangeError(`A stop of ${travel.stopSeconds} s is not a time.`);
  }
  return travel;
}
