import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import type { AddressIndex } from '../../server/region/address-index';
import type { DisturbedAddress, DisturbedSet } from './disturbed-addresses';

export interface HitRates {
  readonly count: number;
  /** Share of the addresses whose house came first. */
  readonly first: number;
  readonly amongFive: number;
  /** Per kind of disturbance, alone or with how many others: first, among five, in percent. */
  readonly byKind: Readonly<Record<string, string>>;
  /** Addresses that fit several houses equally, and how often the one that was meant came first. */
  readonly open: { readonly count: number; readonly first: number; readonly amongFive: number };
  readonly accepted?: number;
  readonly wrong?: readonly string[];
}

/** Looks every address of a set up, as a call taker who has typed it. */
export function measureHits(index: AddressIndex, { clear, open }: DisturbedSet): HitRates {
  const kinds = new Map<string, number[]>();
  for (const address of clear) {
    const key =
      address.kinds.length === 1 ? address.kinds[0]! : `${String(address.kinds.length)} at once`;
    kinds.set(key, [...(kinds.get(key) ?? []), placeOf(index, address)]);
  }
  const places = [...kinds.values()].flat();
  const openPlaces = open.map((address) => placeOf(index, address));
  return {
    count: clear.length,
    first: shareBelow(places, 1),
    amongFive: shareBelow(places, 5),
    byKind: Object.fromEntries(
      [...kinds].map(([kind, own]) => [
        kind,
        `${String(own.length)}: ${percent(shareBelow(own, 1))}, ${percent(shareBelow(own, 5))}`,
      ]),
    ),
    open: {
      count: open.length,
      first: shareBelow(openPlaces, 1),
      amongFive: shareBelow(openPlaces, 5),
    },
  };
}

/** What an import would take without a person's look, and which of it is another house. */
export function measureAccepted(
  index: AddressIndex,
  addresses: readonly DisturbedAddress[],
  metres = SAME_HOUSE_METRES,
): { accepted: number; wrong: string[] } {
  let accepted = 0;
  const wrong: string[] = [];
  for (const { text, meant } of addresses) {
    const found = index.locate(text);
    if (!found || found.confidence < ACCEPT_CONFIDENCE) continue;
    accepted++;
    if (metresBetween([found.lon, found.lat], meant.at) > metres)
      wrong.push(`${text} -> ${found.label}, meant ${meant.number} ${meant.street}, ${meant.city}`);
  }
  return { accepted, wrong };
}

/** A building and the door that was surveyed beside it. */
const SAME_HOUSE_METRES = 15;

/** Where in the list the house is that was meant; Infinity when it is not. */
function placeOf(index: AddressIndex, { text, meant }: DisturbedAddress): number {
  const at = index
    .suggest(text)
    .findIndex(({ lon, lat }) => metresBetween([lon, lat], meant.at) <= SAME_HOUSE_METRES);
  return at < 0 ? Infinity : at;
}

function metresBetween(a: readonly [number, number], b: readonly [number, number]): number {
  const squeeze = Math.cos((a[1] * Math.PI) / 180);
  return Math.hypot((a[0] - b[0]) * squeeze, a[1] - b[1]) * 111_195;
}

const shareBelow = (places: readonly number[], limit: number): number =>
  places.length === 0 ? 0 : places.filter((place) => place < limit).length / places.length;
const percent = (share: number): string => `${(share * 100).toFixed(1)} %`;
