import type { ForecastDto, OutlookDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS } from '@shared/domain/instant';
import type { DrainPoint } from './drain-curves';

/** For specs only: the moment at which the made-up drain was taken. */
export const AT = Date.UTC(2026, 8, 3, 6, 15);

/** For specs only: a drain of two hours whose last point matters. */
export function aDrain(now: Partial<DrainPoint>): DrainDto {
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
  };
}

const same = (value: number) => ({ low: value, middle: value, high: value });

/** For specs only: an outlook that is empty in four hours, give or take one. */
export function anOutlook(told: Partial<OutlookDto> = {}): OutlookDto {
  return {
    emptyAt: { low: AT + 3 * HOUR_MS, middle: AT + 4 * HOUR_MS, high: AT + 5 * HOUR_MS },
    emptyShare: 1,
    until: AT + 36 * HOUR_MS,
    curve: [
      { at: AT, open: same(25) },
      { at: AT + 2 * HOUR_MS, open: { low: 8, middle: 12, high: 17 } },
      { at: AT + 5 * HOUR_MS, open: { low: 0, middle: 0, high: 1 } },
    ],
    lostCents: { low: 100_00, middle: 200_00, high: 400_00 },
    medicineLost: { low: 0, middle: 1, high: 2 },
    arrivals: { low: 4, middle: 9, high: 15 },
    futures: 200,
    ...told,
  };
}

/** For specs only: a forecast with two people on the phones. */
export function aForecast(outlook: Partial<OutlookDto> = {}): ForecastDto {
  return {
    at: AT,
    outlook: anOutlook(outlook),
    phone: {
      staffNow: 2,
      callsPerHour: { low: 6, middle: 10, high: 14 },
      handleMinutes: { low: 7, middle: 8, high: 9 },
      staffing: [
        {
          staff: 1,
          occupancy: 1.33,
          waitSeconds: null,
          within20: 0,
          within60: 0,
          busyWaitSeconds: null,
        },
        {
          staff: 2,
          occupancy: 0.67,
          waitSeconds: 384,
          within20: 0.49,
          within60: 0.51,
          busyWaitSeconds: 3_200,
        },
      ],
    },
    restsOn: [
      'Visits: 45 minutes as routes count them, until visits have been measured; drives: 15 minutes.',
    ],
  };
}
