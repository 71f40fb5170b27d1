import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS } from '@shared/domain/instant';
import type { DrainPoint } from './drain-curves';

/** For specs only: the moment at which the made-up drain was taken. */
export const AT = Date.UTC(2026, 8, 3, 6, 15);

/** For specs only: a drain of two hours whose last point and forecast matter. */
export function aDrain({
  forecast,
  ...now
}: Partial<DrainPoint> & { readonly forecast?: DrainDto['forecast'] }): DrainDto {
  const point: DrainPoint = {
    at: AT,
    arrivals: 0,
    settledByPhone: 0,
    settledByVisit: 0,
    open: 0,
    valueAtRiskCents: 0,
    savedCents: 0,
    lostCents: 0,
  };
  return {
    at: AT,
    bucketMinutes: 60,
    series: [
      { ...point, at: AT - 2 * HOUR_MS },
      { ...point, ...now },
    ],
    byArea: [],
    byTechnician: [],
    forecast: forecast ?? {
      emptyAt: null,
      arrivalsPerHour: 0,
      settledPerHour: 0,
      assumption: 'Never at this rate: 0 calls an hour coming in and 0 settled',
    },
  };
}
