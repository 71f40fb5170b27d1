import type { DoorUse } from '../cold-unit';
import { REFERENCE_ROOM_F } from './warming';

/**
 * Newton's law of cooling, for what is likely and for what is possible. It only ever brings a moment
 * before the published limit; nothing here may say that contents keep longer than that.
 */

/**
 * Time until contents have warmed to a limit.
 *
 * @param tauHours time constant, hours
 * @param fromF degrees F now
 * @param limitF degrees F that must not be passed; below the room's
 * @param roomF degrees F; a room under 72 F counts as 72 F, so that cold gives no credit
 * @returns hours, 0 when they are there already
 */
export function hoursToReach(
  tauHours: number,
  fromF: number,
  limitF: number,
  roomF: number,
): number {
  if (fromF >= limitF) return 0;
  const room = Math.max(REFERENCE_ROOM_F, roomF);
  return tauHours * Math.log((room - fromF) / (room - limitF));
}

/** What is assumed where nobody knows: at worst, and as it mostly is. Our estimates, no source. */
export const LIKELY_ROOM_F = 80;

/** As `doorFactor`, but a door of which nobody knows counts as opened once or twice. Our estimate. */
export const LIKELY_DOOR: Readonly<Record<DoorUse, number>> = {
  shut: 1,
  few: 0.75,
  many: 0.5,
  unknown: 0.75,
};

/** The published dry-ice rule speaks of 18 cubic feet (USDA FSIS, FDA); taken as the usual size. */
const USUAL_CUBIC_FEET = 18;

/**
 * Small units warm sooner, as their walls are large for what is in them: the time goes with the cube
 * root of the volume. Our estimate from geometry; NIST IR 7656 (2009) finds small dormitory units
 * unfit to hold a temperature and gives no hours.
 *
 * @returns 0 to 1; a large unit gets no credit, and an unknown size counts as usual
 */
export const sizeFactor = (cubicFeet: number | null): number =>
  cubicFeet === null ? 1 : Math.min(1, Math.cbrt(Math.max(0, cubicFeet) / USUAL_CUBIC_FEET));

/**
 * A unit that runs but stays warm still carries some heat away. Our estimate, no source; it moves only
 * what is likely, and the published limit stands.
 */
export const PARTLY_COOLED = 1.5;
