import { chanceOf, shuffled } from './chance';
import type { StreetLine } from './street-line';
import type { Town } from './towns';

/** Birds, trees, things of the sea, stones and plants; no person's name, no real place. */
const ROOTS =
  `Heron Tern Osprey Kestrel Plover Sandpiper Egret Bittern Curlew Dunlin Gannet Petrel Merlin Siskin Bunting
  Wren Oriole Thrush Linnet Swift Swallow Martin Pipit Avocet Godwit Turnstone Phalarope Skimmer Pelican Ibis Grebe Loon
  Teal Pintail Wigeon Scaup Eider Brant Rail Snipe Nightjar Kingfisher Flicker Towhee Junco Grosbeak Tanager Vireo Warbler
  Larch Alder Birch Maple Hemlock Spruce Cypress Tupelo Sassafras Hickory Chestnut Sycamore Hornbeam Hawthorn Juniper Cedar
  Laurel Holly Myrtle Bayberry Sumac Willow Aspen Poplar Linden Rowan Elder Hazel Dogwood Redbud Serviceberry Catalpa Locust
  Mulberry Persimmon Quince Medlar Walnut Butternut Beech Tamarack Magnolia Basswood Ironwood Buckeye
  Anchor Capstan Halyard Mainsail Spinnaker Rudder Keel Compass Lantern Beacon Buoy Harbor Tiller Bowline Hawser Windlass
  Sextant Topsail Jib Mizzen Bosun Ballast Cutter Sloop Schooner Ketch Dory Skiff Pilot Channel Breakwater Foghorn
  Quartz Feldspar Mica Garnet Agate Jasper Opal Onyx Granite Slate Marble Basalt Gneiss Schist Flint Beryl Topaz Amber
  Cobalt Copper Pewter Limestone Sandstone Shale Chert Obsidian
  Clover Sorrel Yarrow Tansy Heather Bracken Fern Sedge Thistle Primrose Larkspur Foxglove Lupine Aster Marigold Bluebell`
    .split(/\s+/)
    .filter((word) => word !== '');

const LANDFORMS = [
  'Marsh',
  'Hollow',
  'Point',
  'Neck',
  'Hill',
  'Run',
  'Creek',
  'Ferry',
  'Mill',
  'Meadow',
  'Landing',
  'Pond',
];

/** What else a street of a kind may be called once all the names of that kind are taken. */
const ALTERNATIVES: Readonly<Record<string, readonly string[]>> = {
  Street: ['Street', 'Row'],
  Avenue: ['Avenue', 'Parkway'],
  Court: ['Court', 'Place', 'Circle', 'Terrace', 'Mews'],
  Way: ['Way', 'Path'],
};

export interface StreetName {
  readonly name: string;
  /** Route number of a numbered road. */
  readonly ref: string | null;
}

/** Gives every street key a name, unique within its town; country names are unique in the county. */
export function nameStreets(
  seed: number,
  towns: readonly Town[],
  lines: readonly StreetLine[],
): Map<string, StreetName> {
  const names = new Map<string, StreetName>();
  const country = new NameStock(seed, 'country-names', towns.length);
  const stocks = towns.map((town) => new NameStock(seed, 'town-names', town.index));
  const numbered = numberedStreets(towns[0]!, lines);
  const bases = new Map<string, string>();
  let route = 3;
  for (const line of lines) {
    if (names.has(line.street)) continue;
    const town = line.town === null ? null : towns[line.town]!;
    if (town) {
      names.set(line.street, {
        name: townName(line, town, stocks[town.index]!, bases, numbered),
        ref: null,
      });
    } else if (line.part === 'highway') {
      const toBarrier = towns.some((t) => t.isOnBarrier && line.street.endsWith(`-${t.index}`));
      route += 4;
      names.set(line.street, {
        name: `${country.root()} ${toBarrier ? 'Causeway' : 'Highway'}`,
        ref: String(route),
      });
    } else if (line.part === 'road') {
      names.set(line.street, { name: `${country.root()} Pike`, ref: null });
    } else {
      names.set(line.street, {
        name: `${country.compound()} ${line.part === 'lane' ? 'Lane' : 'Road'}`,
        ref: null,
      });
    }
  }
  return names;
}

function townName(
  line: StreetLine,
  town: Town,
  stock: NameStock,
  bases: Map<string, string>,
  numbered: ReadonlyMap<string, string>,
): string {
  const swaps = town.index % 3 === 1;
  const base = (key: string, make: () => string): string => {
    const known = bases.get(key);
    if (known !== undefined) return known;
    const made = make();
    bases.set(key, made);
    return made;
  };
  switch (line.part) {
    case 'along':
    case 'across': {
      const key = line.street.replace(/[+-](?=$|\/)/, '');
      const isAlong = line.part === 'along';
      const kind = isAlong === swaps ? 'Avenue' : 'Street';
      const name = numbered.get(key) ?? base(key, () => stock.named(kind));
      if (!town.hasDirections) return name;
      return `${compass(town, isAlong, line.street.includes('+'))} ${name}`;
    }
    case 'waterfront':
      return stock.named('Shore Drive');
    case 'loop': {
      // A link from a loop to the town's streets is part of the loop's street by name only when it is alone.
      const key = line.street.replace(/\/e.*$/, '');
      return key === line.street ? base(key, () => stock.named('Drive')) : stock.named('Way');
    }
    default: {
      const loop = bases.get(line.street.replace(/\/c.*$/, ''));
      const root = loop?.replace(/ Drive$/, '') ?? stock.root();
      return (
        stock.firstFree([`${root} Court`, `${root} Place`, `${root} Circle`, `${root} Terrace`]) ??
        stock.named('Court')
      );
    }
  }
}

/** The city's cross streets are numbered from one side to the other. */
function numberedStreets(city: Town, lines: readonly StreetLine[]): Map<string, string> {
  const keys = new Map<string, number>();
  for (const line of lines) {
    const found = /^\d+\/x(-?\d+)[+-]?(\/0)$/.exec(line.street);
    if (line.town === city.index && line.part === 'across' && found)
      keys.set(line.street.replace(/[+-](?=\/)/, ''), Number(found[1]));
  }
  const sorted = [...keys].sort((a, b) => a[1] - b[1]);
  return new Map(sorted.map(([key], i) => [key, `${ordinal(i + 1)} Street`]));
}

export function ordinal(n: number): string {
  const tens = n % 100;
  if (tens >= 11 && tens <= 13) return `${n}th`;
  return `${n}${['th', 'st', 'nd', 'rd'][n % 10] ?? 'th'}`;
}

function compass(town: Town, isAlong: boolean, isPositive: boolean): string {
  const [ax, ay] = town.along;
  const [x, y] = isAlong ? [ax, ay] : [-ay, ax];
  const sign = isPositive ? 1 : -1;
  if (Math.abs(x) > Math.abs(y)) return x * sign > 0 ? 'East' : 'West';
  return y * sign > 0 ? 'North' : 'South';
}

/** Names not used yet in one place. */
class NameStock {
  private readonly roots: string[];
  private readonly used = new Set<string>();
  private at = 0;

  constructor(seed: number, stage: string, number: number) {
    this.roots = shuffled(ROOTS, chanceOf(seed, stage, number));
  }

  root(): string {
    return this.roots[this.at++ % this.roots.length]!;
  }

  named(kind: string): string {
    const alternatives = ALTERNATIVES[kind] ?? [kind];
    for (let tries = 0; tries < this.roots.length; tries++) {
      const root = this.root();
      for (const alternative of alternatives) {
        const name = this.firstFree([`${root} ${alternative}`]);
        if (name) return name;
      }
    }
    throw new Error(`No name of the kind ${kind} is left.`);
  }

  compound(): string {
    for (let k = 0; k < LANDFORMS.length; k++) {
      const root = this.root();
      const start = this.at * 5 + k;
      for (let i = 0; i < LANDFORMS.length; i++) {
        const name = this.firstFree([`${root} ${LANDFORMS[(start + i) % LANDFORMS.length]!}`]);
        if (name) return name;
      }
    }
    throw new Error('No country name is left.');
  }

  /** Takes the first name that is free here. */
  firstFree(names: readonly string[]): string | null {
    const name = names.find((candidate) => !this.used.has(candidate));
    if (name === undefined) return null;
    this.used.add(name);
    return name;
  }
}

/** A few names for parks, lakes and hamlets, apart from those of streets. */
export function nameStock(seed: number, stage: string): (kind: string) => string {
  const stock = new NameStock(seed, stage, 0);
  return (kind) => stock.named(kind);
}
