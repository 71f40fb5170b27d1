import type { KeptRegion, RegionImportDto, RegionSwitchDto } from '@shared/contract/regions';

/** What a step of an import does, for whoever waits. */
const STEP_WORDS: Readonly<Record<string, string>> = {
  reading: 'Reading the extract',
  addresses: 'Sorting the addresses',
  feeders: 'Looking for feeders',
  roads: 'Joining the roads',
  map: 'Drawing the map',
  'house numbers': 'Drawing the house numbers',
  done: 'Finishing',
};

export const stepWords = ({ step }: Pick<RegionImportDto, 'step'>): string =>
  STEP_WORDS[step] ?? 'Starting';

const whole = new Intl.NumberFormat('en-US', { maximumFractionDigits: 0 });
const short = new Intl.NumberFormat('en-US', { maximumFractionDigits: 1 });

export const count = (value: number): string => whole.format(value);

export const counted = (value: number, one: string, many = `${one}s`): string =>
  `${whole.format(value)} ${value === 1 ? one : many}`;

export const percent = (share: number): string => `${String(Math.round(share * 100))} %`;

/** Megabytes of 10^6 bytes, as disks and browsers count them. */
export function megabytes(bytes: number): string {
  if (bytes < 100_000) return `${whole.format(Math.ceil(bytes / 1000))} kB`;
  return `${short.format(bytes / 1e6)} MB`;
}

const KM_IN_A_MILE = 1.609344;

/** Lengths of road as the company's people count them. */
export function miles(km: number): string {
  const length = km / KM_IN_A_MILE;
  return `${length < 10 ? short.format(length) : whole.format(length)} mi`;
}

export function seconds(value: number): string {
  if (value < 90) return `${short.format(value)} s`;
  return `${String(Math.floor(value / 60))} min ${String(Math.round(value % 60))} s`;
}

/** What a kept region holds, in one line. */
export const contents = ({ counts }: KeptRegion): string =>
  [
    counted(counts.addresses, 'address', 'addresses'),
    counted(counts.streets, 'street'),
    ...(counts.roadKm > 0 ? [`${miles(counts.roadKm)} of road`] : []),
  ].join(', ');

/** How a switch has gone, in sentences. */
export function switchWords(change: RegionSwitchDto): string {
  if (change.total === 0) return 'No storm is open, so there was no call to locate.';
  const parts = [
    ...(change.returned > 0
      ? [`${counted(change.returned, 'call')} back where they stood here before`]
      : []),
    ...(change.located > 0 ? [`${counted(change.located, 'call')} found`] : []),
    ...(change.kept > 0 ? [`${counted(change.kept, 'call')} not found but within the region`] : []),
    ...(change.outside > 0 ? [`${counted(change.outside, 'call')} not in this region`] : []),
  ];
  return `${parts.length > 0 ? parts.join(', ') : 'No call to locate'}.`;
}

/** The name that an owner's file had; a sent one is kept under a name of the server's. */
export const fileName = (name: string): string => name.replace(/^[0-9a-f-]{36}~/, '');

export const isExtract = (name: string): boolean => /\.(pbf|osm)$/i.test(name);
