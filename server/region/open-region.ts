import { basename } from 'node:path';
import type { RegionDto } from '@shared/contract/areas';
import type { AddressSuggestion } from '@shared/contract/calls';
import type { AddressSuggestion as Found } from '@shared/domain/address/address-suggestion';
import { ACCEPT_CONFIDENCE } from '@shared/domain/address/address-suggestion';
import { AddressIndex } from './address-index';
import { readFeeders } from './feeders-file';
import type { ImportedRegion } from './import-region';
import type { RegionInUse } from './region-in-use';

/** Loads an imported region's address book, and says where its tiles are. */
export async function openRegion({ manifest, folder }: ImportedRegion): Promise<RegionInUse> {
  const index = await AddressIndex.open(folder);
  const power = await readFeeders(folder);
  const tiles = `/tiles/${manifest.id}-${manifest.hash}`;
  const dto: RegionDto = {
    id: manifest.id,
    name: manifest.name,
    bbox: [...manifest.bbox],
    centre: [...manifest.centre],
    timeZone: manifest.timeZone,
    attribution: manifest.attribution,
    tilesUrl: `${tiles}/{z}/{x}/{y}.pbf`,
    houseNumbersUrl: manifest.counts.addresses > 0 ? `${tiles}/addr/{z}/{x}/{y}.pbf` : null,
    hasCoast: manifest.hasCoastline,
    addressCount: manifest.counts.addresses,
    towns: index.towns,
  };
  return {
    key: basename(folder),
    dto,
    power,
    cities: index.cities,
    suggest: (text, near) => index.suggest(text, { near }).map(toSuggestion),
    locate: (text) => {
      const found = index.locate(text);
      return found && found.confidence >= ACCEPT_CONFIDENCE ? toSuggestion(found) : null;
    },
    nearest: ([lon, lat]) => toSuggestion(index.nearest(lon, lat)),
  };
}

const toSuggestion = (found: Found): AddressSuggestion => ({
  label: found.label,
  unitNo: found.unit ?? '',
  lonLat: [found.lon, found.lat],
  kind: found.kind,
  confidence: found.confidence,
});
