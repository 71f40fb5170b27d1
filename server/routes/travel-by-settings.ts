import type { Settings } from '@shared/contract/office';
import type { TravelSettings } from '@shared/domain/travel/travel-times';

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
