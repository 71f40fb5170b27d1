import { sampleColumn, shapeOf } from './cell-shapes';
import { CONTENT_ROLES, contentScore } from './content-score';
import type { CellShape, ColumnSample } from './cell-shapes';
import { SHARED_ROLES, ROLE_LABELS } from './column-map';
import type { ColumnGuess, ColumnMap, ColumnRole } from './column-map';
import { rolesOfHeader } from './header-words';

/** Rows looked at; more tell nothing new and cost time. */
const SAMPLE_ROWS = 150;
/** Below this a column keeps its cells but plays no part. */
const LEAST_SCORE = 0.3;

interface Candidate {
  readonly index: number;
  readonly role: ColumnRole;
  readonly score: number;
  readonly why: string;
}

/**
 * Guesses what each column of a log holds, from its title and from its cells.
 *
 * @param header the titles, or null for a log that has none
 * @param rows the cells below, in file order
 */
export function guessColumns(
  header: readonly string[] | null,
  rows: readonly (readonly string[])[],
): ColumnMap {
  const usual = header?.length ?? usualWidth(rows);
  // A row with too many cells has slipped; only when most have is a column without a title.
  const width = Math.max(usual, usualWidth(rows));
  // Ragged rows would blur every column to the right of the slip.
  const sampled = rows.filter((row) => row.length === usual).slice(0, SAMPLE_ROWS);
  const from = sampled.length >= 3 ? sampled : rows.slice(0, SAMPLE_ROWS);
  const samples: ColumnSample[] = [];
  for (let i = 0; i < width; i++) samples.push(sampleColumn(from.map((row) => row[i] ?? '')));

  const candidates = samples.flatMap((sample, index) =>
    candidatesOf(index, header?.[index] ?? null, sample),
  );
  candidates.sort((a, b) => b.score - a.score || a.index - b.index);

  const chosen = new Map<number, Candidate>();
  const taken = new Set<ColumnRole>();
  for (const candidate of candidates) {
    if (chosen.has(candidate.index) || candidate.score < LEAST_SCORE) continue;
    if (taken.has(candidate.role) && !SHARED_ROLES.has(candidate.role)) continue;
    if (isRival(candidate.role, taken)) continue;
    // A second appliance column has to say so.
    if (
      candidate.role === 'unitKind' &&
      taken.has('unitKind') &&
      !candidate.why.startsWith('titled')
    )
      continue;
    chosen.set(candidate.index, candidate);
    taken.add(candidate.role);
  }
  promotePhone(chosen);
  pairNames(chosen, samples);
  questionState(chosen);
  splitPower(chosen);
  promoteTime(chosen, candidates);

  promoteMessage(chosen, samples);

  const columns: ColumnGuess[] = samples.map((sample, index) => {
    const title = header?.[index]?.trim() || null;
    const guess = chosen.get(index) ?? leftOver(index, sample);
    return {
      index,
      header: title,
      role: guess.role,
      confidence: Math.round(Math.min(1, guess.score) * 100) / 100,
      why: guess.why,
    };
  });
  return { columns };
}

/**
 * Whether a row is the line of titles: how many of its cells are titles that are known, or 0 when it
 * holds what only a call would hold.
 */
export function titlesIn(cells: readonly string[]): number {
  const said = cells.filter((cell) => cell.trim() !== '');
  if (said.length < 2) return 0;
  let titles = 0;
  for (const cell of said) {
    if (cell.length > 40) return 0;
    const shape = shapeOf(cell);
    if (shape && NEVER_TITLES.has(shape)) return 0;
    const best = Math.max(0, ...rolesOfHeader(cell).values());
    if (best >= 0.6) titles++;
  }
  return titles >= 2 && titles >= said.length * 0.4 ? titles : 0;
}

const NEVER_TITLES: ReadonlySet<CellShape> = new Set<CellShape>([
  'phone',
  'date',
  'time',
  'date-time',
  'address',
  'postcode',
  'number',
]);

function candidatesOf(index: number, title: string | null, sample: ColumnSample): Candidate[] {
  const titled = title === null ? new Map<ColumnRole, number>() : rolesOfHeader(title);
  const result: Candidate[] = [];
  const roles = new Set<ColumnRole>([...titled.keys(), ...CONTENT_ROLES]);
  for (const role of roles) {
    const byTitle = titled.get(role) ?? 0;
    const [byCells, cellsWhy] = sample.count === 0 ? [0, 'no cells'] : contentScore(role, sample);
    // A title that is known but means something else speaks against what the cells seem to be.
    const base = byTitle > 0 ? 0.62 * byTitle : titled.size > 0 ? -0.25 : 0;
    const weight = byTitle > 0 ? 0.38 : 0.75;
    const score = sample.count === 0 ? 0.7 * byTitle : base + weight * byCells;
    if (score <= 0) continue;
    const reasons = [
      byTitle > 0 && title ? `titled "${title.trim()}"` : '',
      byCells > 0.3 ? cellsWhy : byCells < -0.3 ? `its cells do not look like it` : '',
    ].filter(Boolean);
    result.push({ index, role, score, why: reasons.join('; ') || 'a guess' });
  }
  return result;
}

/** A date and time in one column makes a second column of times something else, and so on. */
function isRival(role: ColumnRole, taken: ReadonlySet<ColumnRole>): boolean {
  if (role === 'receivedDate' || role === 'receivedTime') return taken.has('receivedAt');
  return role === 'receivedAt' && taken.has('receivedTime');
}

/** A log whose only numbers are those that the exchange displayed is answered on those. */
function promotePhone(chosen: Map<number, Candidate>): void {
  const all = [...chosen.values()];
  if (all.some(({ role }) => role === 'phone')) return;
  const first = all
    .filter(({ role }) => role === 'altPhone')
    .sort((a, b) => b.score - a.score || a.index - b.index)[0];
  if (first)
    chosen.set(first.index, {
      ...first,
      role: 'phone',
      why: `${first.why}; the only telephone number`,
    });
}

/** Two columns of single names side by side are a first and a last name. */
function pairNames(chosen: Map<number, Candidate>, samples: readonly ColumnSample[]): void {
  const all = [...chosen.values()];
  if (all.some(({ role }) => role === 'firstName' || role === 'lastName')) return;
  const isSingle = (index: number): boolean => {
    const sample = samples[index];
    return (
      sample !== undefined && (sample.shapes.get('name') ?? 0) >= 0.6 && sample.meanWords < 1.5
    );
  };
  const name = all.find(({ role }) => role === 'callerName');
  if (!name || !isSingle(name.index)) return;
  const beside = [name.index + 1, name.index - 1].find(
    (index) => isSingle(index) && ['detail', 'ignore', undefined].includes(chosen.get(index)?.role),
  );
  if (beside === undefined) return;
  const [first, last] = [Math.min(name.index, beside), Math.max(name.index, beside)];
  const why = 'two columns of single names side by side';
  chosen.set(first, { index: first, role: 'firstName', score: 0.4, why });
  chosen.set(last, { index: last, role: 'lastName', score: 0.4, why });
}

/** Of two columns of times without titles the first is when the power went, the second when it came back. */
function splitPower(chosen: Map<number, Candidate>): void {
  const untitled = [...chosen.values()]
    .filter(
      ({ role, why }) =>
        (role === 'powerOutAt' || role === 'powerBackAt') && !why.startsWith('titled'),
    )
    .sort((a, b) => a.index - b.index);
  const titled = [...chosen.values()].some(
    ({ role, why }) => role.startsWith('power') && why.startsWith('titled'),
  );
  const [out, back] = untitled;
  if (titled || !out || !back) return;
  chosen.set(out.index, { ...out, role: 'powerOutAt' });
  chosen.set(back.index, { ...back, role: 'powerBackAt' });
}

/** Two letters in a column without a title are a state only beside the town or the postcode. */
function questionState(chosen: Map<number, Candidate>): void {
  const state = [...chosen.values()].find(
    ({ role, why }) => role === 'state' && !why.startsWith('titled'),
  );
  if (!state) return;
  const beside = [state.index - 1, state.index + 1].map((index) => chosen.get(index)?.role);
  if (!beside.includes('city') && !beside.includes('postcode')) {
    chosen.set(state.index, {
      ...state,
      role: 'ignore',
      score: 0.3,
      why: 'two letters each; perhaps who took the call',
    });
  }
}

/** A log whose only clock column was taken for something else still came in at some time. */
function promoteTime(chosen: Map<number, Candidate>, candidates: readonly Candidate[]): void {
  const all = [...chosen.values()];
  const roles = new Set(all.map(({ role }) => role));
  if (roles.has('receivedAt') || roles.has('receivedTime')) return;
  const power = all.filter(({ role }) => role === 'powerOutAt' || role === 'powerBackAt');
  // Nobody asks when the power went and leaves out when the call came in.
  const lone = power.length === 1 && !power[0]?.why.startsWith('titled') ? power[0] : undefined;
  const best = candidates.find(
    ({ role, index }) =>
      (role === 'receivedAt' || role === 'receivedTime') &&
      (index === lone?.index ||
        ['ignore', 'detail', 'callId', undefined].includes(chosen.get(index)?.role)),
  );
  if (best) chosen.set(best.index, best);
}

/** Without a message of its own, the column that talks most is the message. */
function promoteMessage(chosen: Map<number, Candidate>, samples: readonly ColumnSample[]): void {
  if ([...chosen.values()].some(({ role }) => role === 'remarks')) return;
  const free = samples
    .map((sample, index) => ({ sample, index }))
    .filter(
      ({ sample, index }) =>
        sample.count > 0 &&
        sample.meanWords >= 1.5 &&
        ['detail', undefined].includes(chosen.get(index)?.role),
    )
    .sort((a, b) => b.sample.meanWords - a.sample.meanWords)[0];
  if (free) {
    chosen.set(free.index, {
      index: free.index,
      role: 'remarks',
      score: 0.35,
      why: 'the wordiest column left',
    });
  }
}

function leftOver(index: number, sample: ColumnSample): Candidate {
  if (sample.count === 0) return { index, role: 'ignore', score: 0.5, why: 'empty in every row' };
  const talks = sample.meanWords >= 2 || sample.distinct > 0.3 || sample.shapes.has('yes-no');
  const role: ColumnRole = talks ? 'detail' : 'ignore';
  return { index, role, score: 0.2, why: `not recognised: ${ROLE_LABELS[role].toLowerCase()}` };
}

function usualWidth(rows: readonly (readonly string[])[]): number {
  const counts = new Map<number, number>();
  for (const row of rows) counts.set(row.length, (counts.get(row.length) ?? 0) + 1);
  return [...counts].sort((a, b) => b[1] - a[1])[0]?.[0] ?? 0;
}
