import type { Settings } from '@shared/contract/office';
import {
  DEFAULT_TRAVEL,
  straightLineTravel,
  type TravelSettings,
  type TravelTimes,
} from '@shared/domain/travel/travel-times';
import type { RoadsPort } from '../workers/ports';

/** Kilometres in a statute mile. Source: NIST Special Publication 811 (2008), appendix B. */
const KM_PER_MILE = 1.609344;

/** How the company's settings make drives of straight lines. */
export const travelBySettings = ({
  circuity,
  speedMph,
}: Pick<Settings, 'circuity' | 'speedMph'>): Partial<TravelSettings> => ({
  circuity,
  speedKmh: speedMph * KM_PER_MILE,
});

/** Drives as they are now: along the roads as the storm has left them, or straight where no roads are known. */
export const travelNow = (
  roads: RoadsPort | null,
  settings: Pick<Settings, 'circuity' | 'speedMph'>,
): TravelTimes =>
  roads?.travel(DEFAULT_TRAVEL.stopSeconds) ?? straightLineTravel(travelBySettings(settings));
