/**
 * The hours of a day as traffic has them, by the region's wall clock. Night goes on past midnight. Our
 * division, no source: whoever keeps counts of their own roads knows better.
 */
export const DRIVING_HOURS = [
  { key: 'morning', fromHour: 6, untilHour: 9 },
  { key: 'day', fromHour: 9, untilHour: 16 },
  { key: 'evening', fromHour: 16, untilHour: 19 },
  { key: 'night', fromHour: 19, untilHour: 6 },
] as const;
export type DrivingHours = (typeof DRIVING_HOURS)[number]['key'];

/** @param minuteOfDay 0 to 1439 by the wall clock */
export function drivingHoursAt(minuteOfDay: number): DrivingHours {
  const hour = minuteOfDay / 60;
  const found = DRIVING_HOURS.find(
    ({ fromHour, untilHour }) => fromHour < untilHour && hour >= fromHour && hour < untilHour,
  );
  return found?.key ?? 'night';
}
