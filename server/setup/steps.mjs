import { performance } from 'node:perf_hooks';

const NAME_WIDTH = 12;

/**
 * Prints a script's progress as one calm line a step: its name, what was done, how long it took.
 *
 * @param out where lines go; stderr for a script whose stdout is read by a program
 */
export function stepPrinter(out = process.stdout) {
  const line = (name, text, seconds) =>
    out.write(
      `  ${name.padEnd(NAME_WIDTH)} ${text}${seconds === undefined ? '' : `  ${seconds} s`}\n`,
    );

  return {
    /** A line that is no step. */
    say: (text = '') => out.write(text ? `  ${text}\n` : '\n'),

    /**
     * Runs one step. `work` gets `tell`, for a line before something slow, and returns what was done.
     * It may also return `{ text, value }` when the caller needs the value.
     */
    async step(name, work) {
      const start = performance.now();
      const result = await work((text) => line(name, text));
      const seconds = ((performance.now() - start) / 1000).toFixed(1);
      const { text, value } = typeof result === 'string' ? { text: result } : result;
      line(name, text, seconds);
      return value;
    },
  };
}
