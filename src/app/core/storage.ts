/** What this browser kept under `name`; `null` also when it keeps nothing for anyone. */
export function fromStorage(name: string): string | null {
  try {
    return localStorage.getItem(name);
  } catch {
    return null; // Storage is refused, as in some private windows.
  }
}

/** Keeps a preference; it only lasts for this page where storage is refused. */
export function toStorage(name: string, value: string): void {
  try {
    localStorage.setItem(name, value);
  } catch {
    // QuotaExceededError or SecurityError: a preference is not worth an error message.
  }
}
