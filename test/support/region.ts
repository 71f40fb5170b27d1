import type { AddressSuggestion } from '@shared/contract/calls';
import type { RegionInUse } from '../../server/region/region-in-use';

const ADDRESSES: readonly AddressSuggestion[] = [
  {
    label: '1210 N Heron St, Pell Harbor',
    unitNo: '',
    lonLat: [-47.71, 36.41],
    kind: 'rooftop',
    confidence: 1,
  },
  {
    label: '12 Larch Ave, Pell Harbor',
    unitNo: '',
    lonLat: [-47.7, 36.4],
    kind: 'rooftop',
    confidence: 1,
  },
];

/** A hamlet of two addresses; the real region has tests of its own. */
export const TEST_REGION: RegionInUse = {
  key: 'hamlet-0',
  cities: ['Pell Harbor'],
  power: { feeders: [], substations: [] },
  dto: {
    id: 'hamlet',
    name: 'Hamlet',
    bbox: [-48, 36.1, -47.4, 36.7],
    centre: [-47.7, 36.4],
    timeZone: 'America/New_York',
    attribution: 'invented',
    tilesUrl: '/tiles/hamlet-0/{z}/{x}/{y}.pbf',
    houseNumbersUrl: null,
    hasCoast: true,
    addressCount: ADDRESSES.length,
    towns: [],
  },
  suggest: (text) =>
    ADDRESSES.filter(({ label }) => label.toLowerCase().includes(text.trim().toLowerCase())),
  locate: (text) =>
    ADDRESSES.find(({ label }) =>
      text.toLowerCase().startsWith(label.toLowerCase().split(',')[0] ?? ''),
    ) ?? null,
  nearest: () => ADDRESSES[1] ?? null,
};
