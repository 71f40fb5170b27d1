import { CLASS_SPEED_KMH, type RoadClass } from '@shared/domain/roads/road-class';
import type { Tags } from './osm-model';

/** What a way is to somebody who drives a van, or null when it is no road for them. */
export interface RoadWay {
  readonly roadClass: RoadClass;
  /** km/h along the way and against it; 0 where it may not be driven. */
  readonly alongKmh: number;
  readonly againstKmh: number;
  /** Minutes that a ferry states for its whole way, else null. */
  readonly minutes: number | null;
  readonly isBridge: boolean;
  readonly isFord: boolean;
  /** Open only to those who begin or end their drive there. */
  readonly isForVisits: boolean;
  readonly name: string;
}

const CLASSES: Readonly<Record<string, RoadClass>> = {
  motorway: 'motorway',
  motorway_link: 'motorway',
  trunk: 'trunk',
  trunk_link: 'trunk',
  primary: 'primary',
  primary_link: 'primary',
  secondary: 'secondary',
  secondary_link: 'secondary',
  tertiary: 'tertiary',
  tertiary_link: 'tertiary',
  unclassified: 'unclassified',
  road: 'unclassified',
  residential: 'residential',
  living_street: 'residential',
  service: 'service',
};

/**
 * The most telling of the tags that say who may use it, by the access hierarchy of the OpenStreetMap
 * wiki, "Key:access": motorcar before motor vehicle before vehicle before everybody.
 */
const ACCESS_KEYS = ['motorcar', 'motor_vehicle', 'vehicle', 'access'] as const;

/** Not for a van that calls at a house: neither now nor with the household's leave. */
const CLOSED = new Set([
  'no',
  'private',
  'agricultural',
  'forestry',
  'agricultural;forestry',
  'emergency',
  'military',
  'bus',
  'psv',
]);

/** For those who have business there, and not for a way through ("Key:access", as above). A visit is business. */
const FOR_VISITS = new Set(['destination', 'delivery', 'customers']);

const accessOf = (tags: Tags): string | undefined =>
  ACCESS_KEYS.map((key) => tags[key]).find((value) => value !== undefined);

/** Whether a van may use it, be it only for a visit. */
export const isOpenTo = (tags: Tags): boolean => !CLOSED.has(accessOf(tags) ?? 'yes');

/** Whether somebody said that motor vehicles may use it, so that it counts though its kind would not. */
const isSaidOpen = (tags: Tags): boolean =>
  ['motorcar', 'motor_vehicle'].some((key) =>
    ['yes', 'designated', 'permissive', 'destination'].includes(tags[key] ?? ''),
  );

export function roadWayOf(tags: Tags): RoadWay | null {
  if (tags['area'] === 'yes' || tags['service'] === 'emergency_access') return null;
  const roadClass = classOf(tags);
  if (roadClass === null || !isOpenTo(tags)) return null;
  const [along, against] = directionsOf(tags, roadClass);
  if (!along && !against) return null;
  const usual = CLASS_SPEED_KMH[roadClass];
  const kmh = (own: string): number =>
    Math.min(usual, speedKmh(tags[own]) ?? speedKmh(tags['maxspeed']) ?? usual);
  return {
    roadClass,
    alongKmh: along ? kmh('maxspeed:forward') : 0,
    againstKmh: against ? kmh('maxspeed:backward') : 0,
    minutes: roadClass === 'ferry' ? durationMinutes(tags['duration']) : null,
    isBridge: !['no', undefined].includes(tags['bridge']),
    isFord: isFord(tags),
    isForVisits: FOR_VISITS.has(accessOf(tags) ?? 'yes'),
    name: tags['name'] ?? tags['ref'] ?? '',
  };
}

function classOf(tags: Tags): RoadClass | null {
  if (tags['route'] === 'ferry') return tags['foot'] === 'only' ? null : 'ferry';
  const highway = tags['highway'] ?? '';
  if (highway === 'track') return isSaidOpen(tags) ? 'service' : null;
  return CLASSES[highway] ?? null;
}

export const isFord = (tags: Tags): boolean =>
  tags['highway'] === 'ford' || !['no', undefined].includes(tags['ford']);

/** Which ways traffic goes: along the line, against it. */
function directionsOf(tags: Tags, roadClass: RoadClass): readonly [boolean, boolean] {
  const said = tags['oneway:motorcar'] ?? tags['oneway:motor_vehicle'] ?? tags['oneway'];
  if (said === 'yes' || said === 'true' || said === '1') return [true, false];
  if (said === '-1' || said === 'reverse') return [false, true];
  // Lanes that change their direction by the hour: nobody can plan on them.
  if (said === 'reversible' || said === 'alternating') return [false, false];
  if (said === 'no' || said === 'false' || said === '0') return [true, true];
  const isRound = tags['junction'] === 'roundabout' || tags['junction'] === 'circular';
  return [true, !isRound && !(roadClass === 'motorway' && tags['highway'] === 'motorway')];
}

/** Kilometres in a statute mile. Source: NIST Special Publication 811 (2008), appendix B. */
const KM_PER_MILE = 1.609344;
/** A knot in km/h. Source: NIST Special Publication 811 (2008), section 5.2. */
const KMH_PER_KNOT = 1.852;

/** A posted speed in km/h: `50`, `30 mph`, `5 knots`; null when none or none in figures. */
export function speedKmh(text: string | undefined): number | null {
  // Where several are posted the lowest is the safe one to count with.
  const speeds = (text ?? '').split(/[;|]/).flatMap((part) => {
    const found = /^\s*(\d+(?:\.\d+)?)\s*(mph|knots|km\/h|kmh|kph)?\s*$/i.exec(part);
    if (!found) return part.trim().toLowerCase() === 'walk' ? [WALK_KMH] : [];
    const unit = (found[2] ?? '').toLowerCase();
    const factor = unit === 'mph' ? KM_PER_MILE : unit === 'knots' ? KMH_PER_KNOT : 1;
    return Number(found[1]) > 0 ? [Number(found[1]) * factor] : [];
  });
  return speeds.length === 0 ? null : Math.min(...speeds);
}

/** What `maxspeed=walk` is counted as: our estimate. */
const WALK_KMH = 7;

/** `20`, `00:20`, `1:05:30` or `PT1H5M` in minutes; null for anything else. */
export function durationMinutes(text: string | undefined): number | null {
  const clock = /^(?:(\d+):)?(\d+)(?::(\d+))?$/.exec(text ?? '');
  const iso = /^PT(?=\d)(?:(\d+)H)?(?:(\d+)M)?(?:(\d+)S)?$/.exec(text ?? '');
  const found = clock ?? iso;
  if (!found) return null;
  const [hours, minutes, seconds] = [1, 2, 3].map((group) => Number(found[group] ?? 0));
  const total = hours! * 60 + minutes! + seconds! / 60;
  return total > 0 ? total : null;
}

/** Barriers that a van passes; at any other it has to turn round. */
const PASSABLE = new Set([
  'cattle_grid',
  'border_control',
  'toll_booth',
  'sally_port',
  'entrance',
  'height_restrictor',
  'gate',
  'lift_gate',
  'swing_gate',
  'no',
  'kerb',
  'speed_camera',
]);

/** Whether a node with these tags stops a van: a barrier, unless the node itself says who may pass. */
export function isInTheWay(tags: Tags): boolean {
  if (tags['barrier'] === undefined) return false;
  if (ACCESS_KEYS.some((key) => tags[key] !== undefined)) return !isOpenTo(tags);
  return !PASSABLE.has(tags['barrier']);
}
