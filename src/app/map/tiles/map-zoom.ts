/** Below this the tiles hold nothing; the map does not zoom out further. */
export const MAP_MIN_ZOOM = 9;
export const MAP_MAX_ZOOM = 19;
/** Closer than this a town's name would stand somewhere in the middle of a street. */
export const TOWN_NAMES_MAX_ZOOM = 16;
/** House numbers are fetched and shown from here on. */
export const NUMBERS_MIN_ZOOM = 17;
/** The closest tiles there are; closer views are drawn from these. */
export const GROUND_DATA_ZOOM = 14;
export const NUMBERS_DATA_ZOOM = 16;
