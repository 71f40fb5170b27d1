import type { LogRow } from './log-file';

/**
 * A key that stays the same for the same row, in this file or in a later one: 128 bits as 32
 * hexadecimal digits. White space, letter case and blanks at the end do not count, since they change
 * when a file is opened and saved; an exact repeat within one file is told apart by its turn.
 *
 * Four lanes of FNV-1a (Fowler, Noll and Vo; 32 bits) with different starts, then mixed. It guards
 * against accident, not against malice.
 *
 * @param turn 0 for the first row with these cells, 1 for the next
 */
export function rowKey(cells: readonly string[], turn = 0): string {
  const text = `${settled(cells)}\u001e${turn}`;
  const lanes = [0x811c9dc5, 0x01000193 ^ 0x811c9dc5, 0x9e3779b9, 0x85ebca6b];
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i);
    for (let lane = 0; lane < 4; lane++) {
      // Each lane sees the letters in another light, or the lanes would collide together.
      lanes[lane] = Math.imul(
        (lanes[lane] ?? 0) ^ (code + lane * 0x3b),
        0x01000193 + lane * 0x02468,
      );
    }
  }
  return lanes
    .map((lane, i) =>
      mix(lane ^ Math.imul((lanes[(i + 1) % 4] ?? 0) >>> 7, 0x27d4eb2f))
        .toString(16)
        .padStart(8, '0'),
    )
    .join('');
}

/** The keys of a whole log, in its order. */
export function rowKeys(rows: readonly LogRow[]): readonly string[] {
  const turns = new Map<string, number>();
  return rows.map(({ cells }) => {
    const same = settled(cells);
    const turn = turns.get(same) ?? 0;
    turns.set(same, turn + 1);
    return rowKey(cells, turn);
  });
}

function settled(cells: readonly string[]): string {
  const tidy = cells.map((cell) =>
    // Most cells are tidy already, and normalising is the dear part.
    /^(?:[!-~]+(?: [!-~]+)*)?$/.test(cell)
      ? cell.toLowerCase()
      : cell.normalize('NFC').replace(/\s+/g, ' ').trim().toLowerCase(),
  );
  while (tidy.length > 0 && tidy[tidy.length - 1] === '') tidy.pop();
  return tidy.join('\u001f');
}

function mix(value: number): number {
  let hash = value;
  hash = Math.imul(hash ^ (hash >>> 16), 0x85ebca6b);
  hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35);
  return (hash ^ (hash >>> 16)) >>> 0;
}
