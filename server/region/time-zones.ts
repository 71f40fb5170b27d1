/** Whether times can be shown in that zone; only names of places know of summer time. */
export function isTimeZone(name: string): boolean {
  try {
    // Throws a RangeError for a zone that it does not know; fixed offsets it takes.
    new Intl.DateTimeFormat('en', { timeZone: name });
    return /^[A-Za-z]/.test(name);
  } catch {
    return false;
  }
}
