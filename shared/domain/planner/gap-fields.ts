/**
 * Fields of a gap in `RouteTimes.gaps`. Gap i lies before stop i and begins at i × GAP; the last one lies
 * before the way home. All figures of a gap lie side by side, and those that turn most jobs away first,
 * because reading memory is most of what the search does.
 */
export const GAP = 16;
/** When the technician is ready to leave the place before the gap. */
export const READY = 0;
/** Place before the gap, and after it. */
export const PLACE = 1;
export const NEXT = 2;
/** Seconds of the drive through the gap. */
export const DIRECT = 3;
/** The latest arrival after the gap that loses nothing for good, and what is lost later at least. */
export const LATEST = 4;
export const TOLL = 5;
/** What a slip of more than SLACK may save at most; Infinity where a break is to come. */
export const CREDIT = 6;
/** First break that is still to come when the technician is ready. */
export const PEND = 7;
/** Arrival at the place after the gap. */
export const ARRIVE = 8;
/** Price of a slip of that arrival per second: exact up to SLACK seconds, and beyond at the least. */
export const SLOPE = 9;
export const SLACK = 10;
/** A slip of more seconds breaks the overtime limit. */
export const HARD = 11;
/** A slip of more seconds loses at least TOLL, on top of SLOPE. */
export const REACH = 12;
/** Start and price of the stop after the gap. */
export const START = 13;
export const STOP_PRICE = 14;
