import { stringify } from 'csv-stringify/sync';
import { DateTime } from 'luxon';
import type { RegionDto } from '@shared/contract/areas';
import type { DrainDto } from '@shared/contract/office';
import { creditText } from '@shared/domain/map-credit';
import { safeCell } from './safe-cell';

/**
 * The drain as a table for a spreadsheet (RFC 4180), times in the region's zone. Three tables
 * below each other: over time, by area, by technician.
 */
export function drainCsv(
  drain: DrainDto,
  { timeZone: zone, attribution }: Pick<RegionDto, 'timeZone' | 'attribution'>,
): string {
  const time = (at: number): string =>
    DateTime.fromMillis(at, { zone }).toFormat('yyyy-LL-dd HH:mm');
  const figures = [
    'Arrivals',
    'Settled by phone',
    'Settled by visit',
    'Open',
    'Value at risk (USD)',
    'Saved (USD)',
    'Lost (USD)',
  ];
  const cells = (row: Omit<DrainDto['series'][number], 'at'>): string[] => [
    String(row.arrivals),
    String(row.settledByPhone),
    String(row.settledByVisit),
    String(row.open),
    dollars(row.valueAtRiskCents),
    dollars(row.savedCents),
    dollars(row.lostCents),
  ];
  return stringify([
    ['Time', ...figures],
    ...drain.series.map((point) => [time(point.at), ...cells(point)]),
    [],
    ['Area', ...figures],
    ...drain.byArea.map((share) => [safeCell(share.name), ...cells(share)]),
    [],
    ['Technician', ...figures],
    ...drain.byTechnician.map((share) => [safeCell(share.name), ...cells(share)]),
    [],
    ['Forecast', drain.forecast.emptyAt === null ? 'never' : time(drain.forecast.emptyAt)],
    ['Assumption', safeCell(drain.forecast.assumption)],
    // Areas and drives come from the map: its licence asks to be named (ODbL 1.0, section 4.3).
    ['Map data', safeCell(creditText(attribution))],
  ]);
}

const dollars = (cents: number): string => (cents / 100).toFixed(2);
