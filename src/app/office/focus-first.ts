/**
 * Moves the focus to the first of `host`'s elements that fits, once what has just changed is drawn:
 * whoever works by keyboard goes on where the form needs them.
 */
export function focusFirst(host: HTMLElement, selector: string): void {
  setTimeout(() => host.querySelector<HTMLElement>(selector)?.focus());
}

/** A field that something is wrong with. */
export const FAULTY = 'input[aria-invalid=true], input.ng-invalid';
/** What somebody else changed meanwhile. */
export const OVERTAKEN = '.caution';
