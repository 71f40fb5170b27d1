import type { AbstractControl, FormGroup, ValidatorFn } from '@angular/forms';
import type { ProblemError } from '../core/problem-error';

/** A check that answers in the words that stand under the field; `null` when all is well. */
export const inWords =
  <V>(check: (value: V) => string | null): ValidatorFn =>
  (control: AbstractControl) => {
    const words = check(control.value as V);
    return words === null ? null : { words };
  };

export const filled = (words: string): ValidatorFn =>
  inWords<string>((text) => (text.trim() === '' ? words : null));

/** The first step of a JSON pointer: `/van/start-relay` and `#/van/start-relay` are about `van`. */
const fieldOf = (pointer: string): string => pointer.replace(/^#?\//, '').split('/')[0] ?? '';

/**
 * Puts what the server refused beside the fields that it refused.
 *
 * @param own what to say instead of the server's technical words, by field
 * @returns whether every fault found its field
 */
export function showFaults(
  form: FormGroup,
  error: ProblemError,
  own: Readonly<Record<string, string>> = {},
): boolean {
  let isComplete = error.fieldErrors.size > 0;
  for (const [pointer, detail] of error.fieldErrors) {
    const name = fieldOf(pointer);
    const control = form.get(name);
    if (control) {
      control.setErrors({ words: own[name] ?? detail });
      control.markAsTouched();
    } else isComplete = false;
  }
  return isComplete;
}
