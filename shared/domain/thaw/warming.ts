import type { DoorUse } from '../cold-unit';

/**
 * How heat, the door and a weak start bring "at risk" forward.
 *
 * These factors are our estimates. They only ever shorten the time until the contents count as at
 * risk; they never move the published moment at which contents are lost, and never lengthen
 * anything. Set against Newton's law of cooling fitted to the published 4 h (37 to 40 F in a 72 F
 * room): at 80 / 90 / 100 F it gives 3.23 / 2.60 / 2.18 h, these factors 3.20 / 2.56 / 2.13 h.
 */

/** Consumer limit for cold food, degrees F. Source: USDA FSIS, FDA (refrigerator at 40 F or below). */
export const CONSUMER_LIMIT_F = 40;

/** Freezing point of water: food stays near it until its ice has melted. */
export const THAW_F = 32;

/** Share of the time to the limit after which contents count as at risk. Our estimate: time to act. */
export const ACT_SHARE = 0.75;

/** Assumed when nobody knows the room's temperature. Our estimate: a summer kitchen without power. */
export const ASSUMED_ROOM_F = 90;

/** The room for which the published hours are taken to hold. Our estimate; the sources name none. */
export const REFERENCE_ROOM_F = 72;

/** Our estimate, no source: published hours hold for a shut door. 'few' is once or twice. */
const DOOR_FACTORS: Readonly<Record<DoorUse, number>> = {
  shut: 1,
  few: 0.75,
  many: 0.5,
  unknown: 0.5,
};

/** Assumed when nobody knows how cold it was: the published 4 h assume a unit that worked. */
export const ASSUMED_BEFORE_F = 37;

/**
 * Ratio of the temperature differences that drive the warming, against the reference room.
 *
 * @param roomF degrees F; null counts as 90 F
 * @param limitF the temperature that the contents must not pass, degrees F
 * @returns 0 to 1; never above 1, so a cold room gives no credit
 */
export function roomFactor(roomF: number | null, limitF: number): number {
  const room = roomF ?? ASSUMED_ROOM_F;
  return room <= REFERENCE_ROOM_F ? 1 : (REFERENCE_ROOM_F - limitF) / (room - limitF);
}

export const doorFactor = (door: DoorUse): number => DOOR_FACTORS[door];

/**
 * What is left of the time when the refrigerator was weak before cooling was lost.
 *
 * @param beforeF degrees F inside before the loss; null counts as 37 F
 * @returns 1 at 37 F or colder, falling to 0 at 40 F (Newton's law in a 72 F room)
 */
export function startFactor(beforeF: number | null): number {
  const before = beforeF ?? ASSUMED_BEFORE_F;
  if (before <= ASSUMED_BEFORE_F) return 1;
  if (before >= CONSUMER_LIMIT_F) return 0;
  const margin = (startF: number): number =>
    Math.log((REFERENCE_ROOM_F - startF) / (REFERENCE_ROOM_F - CONSUMER_LIMIT_F));
  return margin(before) / margin(ASSUMED_BEFORE_F);
}

const DOOR_WORDS: Readonly<Record<DoorUse, string>> = {
  shut: 'door shut',
  few: 'door opened once or twice',
  many: 'door opened many times',
  unknown: 'door use not known, counted as opened many times',
};

export const doorInWords = (door: DoorUse): string => DOOR_WORDS[door];

export const roomInWords = (roomF: number | null): string =>
  roomF === null ? `room not known, ${ASSUMED_ROOM_F} F assumed` : `room ${roomF} F`;
