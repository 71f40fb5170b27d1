import { stringify } from 'csv-stringify/sync';
import { DateTime } from 'luxon';
import type { RegionDto } from '@shared/contract/areas';
import type { ForecastDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { creditText } from '@shared/domain/map-credit';
import { safeCell } from './safe-cell';

/**
 * The drain as a table for a spreadsheet (RFC 4180), times in the region's zone. Three tables
 * below each other: over time, by area, by technician; and, while the storm is open, the forecast.
 */
export function drainCsv(
  drain: DrainDto,
  forecast: ForecastDto | null,
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
    ...(forecast ? forecastRows(forecast, time) : []),
    // Areas and drives come from the map: its licence asks to be named (ODbL 1.0, section 4.3).
    ['Map data', safeCell(creditText(attribution))],
  ]);
}

/** Figures between which four of five futures lie, and the middle one. */
function forecastRows({ outlook, restsOn }: ForecastDto, time: (at: number) => string): string[][] {
  const when = (at: number | null): string =>
    at === null ? `after ${time(outlook.until)}` : time(at);
  const { emptyAt, lostCents, medicineLost, arrivals } = outlook;
  const row = <T>(name: string, band: { low: T; middle: T; high: T }, cell: (v: T) => string) => [
    name,
    cell(band.low),
    cell(band.middle),
    cell(band.high),
  ];
  const count = (value: number): string => String(Math.round(value));
  return [
    ['Forecast', '10 %', '50 %', '90 %'],
    row('Backlog empty', emptyAt, when),
    row('Lost from now on (USD)', lostCents, dollars),
    row('Households whose medicine is lost', medicineLost, count),
    row('Calls still to come', arrivals, count),
    ...outlook.curve.map(({ at, open }) => row(`Open ${time(at)}`, open, count)),
    ...restsOn.map((words) => ['Rests on', safeCell(words)]),
    [],
  ];
}

const dollars = (cents: number): string => (cents / 100).toFixed(2);
