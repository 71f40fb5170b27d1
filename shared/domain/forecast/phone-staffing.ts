import { answeredWithin, phoneService } from './erlang-c';

export interface PhoneStaffing {
  readonly staff: number;
  readonly occupancy: number;
  /** Mean wait in seconds; null where the line grows without end. */
  readonly waitSeconds: number | null;
  /** Shares of the callers, 0 to 1. */
  readonly within20: number;
  readonly within60: number;
  /** The mean wait when calls come as thick as in one future of ten. */
  readonly busyWaitSeconds: number | null;
}

/** Fewer than enough are shown as well, to see what one person more is worth. */
const SHOWN_BELOW = 1;
const SHOWN_ABOVE = 5;

/** What each number of people on the phones makes of the calls to come; the present number among them. */
export function phoneStaffing(
  callsPerHour: number,
  busyCallsPerHour: number,
  handleMinutes: number,
  staffNow: number,
): readonly PhoneStaffing[] {
  const enough = Math.floor((callsPerHour * handleMinutes) / 60) + 1;
  const around = Array.from(
    { length: SHOWN_BELOW + SHOWN_ABOVE + 1 },
    (_, i) => enough - SHOWN_BELOW + i,
  );
  const numbers = [...new Set([staffNow, ...around])]
    .filter((staff) => staff > 0)
    .sort((a, b) => a - b);
  return numbers.map((staff) => {
    const { occupancy, meanWaitSeconds } = phoneService(callsPerHour, handleMinutes, staff);
    return {
      staff,
      occupancy,
      waitSeconds: meanWaitSeconds,
      within20: answeredWithin(20, callsPerHour, handleMinutes, staff),
      within60: answeredWithin(60, callsPerHour, handleMinutes, staff),
      busyWaitSeconds: phoneService(busyCallsPerHour, handleMinutes, staff).meanWaitSeconds,
    };
  });
}
