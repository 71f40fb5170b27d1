import { signal } from '@angular/core';
import { newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';

/** How the saving of something drawn on the map stands: one at a time, and a repeat is the same command. */
export class Saving<T> {
  private readonly pending = signal(false);
  private readonly trouble = signal('');
  /** The command that was sent last and its content; a repeat of the same is the same command. */
  private sent = { id: '', content: '' };

  readonly isBusy = this.pending.asReadonly();
  /** Why saving did not work; empty as long as nothing is wrong. */
  readonly problem = this.trouble.asReadonly();

  /**
   * @param takeCurrent is given what somebody else has saved meanwhile
   * @param takeGone is called when somebody else has removed it
   */
  constructor(
    private readonly takeCurrent: (current: T) => void,
    private readonly takeGone: () => void = () => undefined,
  ) {}

  say(problem: string): void {
    this.trouble.set(problem);
  }

  commandFor(content: string): string {
    if (this.sent.content !== content) this.sent = { id: newId(), content };
    return this.sent.id;
  }

  /** Everything that was typed and drawn stays when it fails; the person decides. */
  async run(work: () => Promise<void>): Promise<void> {
    this.pending.set(true);
    this.trouble.set('');
    try {
      await work();
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      this.trouble.set(problemWords(error));
      const current = error.current as T | undefined;
      if (error.code === 'stale-version' && current) this.takeCurrent(current);
      if (error.code === 'not-found') this.takeGone();
    } finally {
      this.pending.set(false);
    }
  }
}
