/** How a road is ranked, the way OpenStreetMap's `highway` tag tells it; a link counts as its road. */
export const ROAD_CLASSES = [
  'motorway',
  'trunk',
  'primary',
  'secondary',
  'tertiary',
  'unclassified',
  'residential',
  'service',
  'ferry',
] as const;
export type RoadClass = (typeof ROAD_CLASSES)[number];

/**
 * Speeds in km/h on a dry road with little traffic, where no lower limit is posted. Our estimate, no
 * source: what a van keeps up between two lights, below the limits that are usual for each class. For a
 * ferry that states no duration it is the ship's way, waiting for it not included.
 */
export const CLASS_SPEED_KMH: Readonly<Record<RoadClass, number>> = {
  motorway: 105,
  trunk: 90,
  primary: 80,
  secondary: 64,
  tertiary: 56,
  unclassified: 48,
  residential: 40,
  service: 24,
  ferry: 15,
};
