import { sampleColumn, shapeOf } from './cell-shapes';
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

const CONTENT_ROLES: readonly ColumnRole[] = [
  'callId',
  'receivedAt',
  'receivedDate',
  'receivedTime',
  'callerName',
  'phone',
  'altPhone',
  'address',
  'streetNumber',
  'street',
  'unitNo',
  'city',
  'state',
  'postcode',
  'unitKind',
  'remarks',
  'powerOutAt',
  'powerBackAt',
  'language',
  'medicine',
];

/** How well the cells of a column fit a role, -1 to 1, and why. */
function contentScore(role: ColumnRole, sample: ColumnSample): [number, string] {
  const share = (...shapes: CellShape[]): number =>
    shapes.reduce((sum, shape) => sum + (sample.shapes.get(shape) ?? 0), 0);
  const percent = (value: number): string => `${Math.round(value * 100)} % of its cells`;
  const when = share('time', 'date-time');
  const words = share('message', 'name', 'other', 'unit', 'street');
  switch (role) {
    case 'phone':
    case 'altPhone': {
      const phones = share('phone');
      const fill = sample.count / Math.max(sample.total, 1);
      const preferred = role === 'phone' ? fill >= 0.5 || phones === 0 : fill < 0.5;
      return [
        phones >= 0.4 ? phones - (preferred ? 0 : 0.15) : -1,
        `${percent(phones)} are telephone numbers`,
      ];
    }
    case 'receivedAt': {
      const both = share('date-time');
      return [
        both >= 0.5 ? both * (0.6 + 0.4 * sample.rising) : when >= 0.5 ? 0.1 : -1,
        `${percent(both)} are a date and a time`,
      ];
    }
    case 'receivedDate': {
      const dates = share('date');
      return [
        dates >= 0.5
          ? dates * (sample.different <= 12 ? 1 : 0.7)
          : share('date-time') > 0.3
            ? -0.6
            : -1,
        `${percent(dates)} are dates`,
      ];
    }
    case 'receivedTime': {
      const numbers = share('number');
      const compact =
        sample.compactTimes >= 0.95 && sample.rising > 0.9 && sample.counting < 0.5 ? numbers : 0;
      const times = share('time') + compact;
      return [
        times >= 0.5 ? times * (0.45 + 0.55 * sample.rising) : share('date-time') > 0.5 ? -0.3 : -1,
        `${percent(times)} are times of day`,
      ];
    }
    case 'callerName': {
      const names = share('name');
      const varied = Math.min(1, Math.max(sample.distinct * 1.4, sample.different / 12));
      return [
        names >= 0.4 ? names * varied * (sample.meanWords > 1.4 ? 1 : 0.7) : -0.7,
        `${percent(names)} look like names`,
      ];
    }
    case 'firstName':
    case 'lastName': {
      const names = share('name', 'state', 'other');
      return [names >= 0.5 ? names : -0.7, `${percent(names)} look like names`];
    }
    case 'business':
      return [
        share('name', 'other', 'message', 'unit', 'street') >= 0.5 ? 0.4 : -0.5,
        'its cells are words',
      ];
    case 'address': {
      const addresses = share('address') + share('street') * 0.5 + share('town-line') * 0.5;
      return [
        addresses >= 0.35 ? Math.min(1, addresses) : -0.8,
        `${percent(share('address'))} are addresses`,
      ];
    }
    case 'streetNumber': {
      const numbers = share('number') + share('apartment') * 0.8 + share('postcode') * 0.5;
      const ordered = sample.rising > 0.9 && sample.distinct > 0.9;
      return [
        numbers >= 0.6 ? numbers * (ordered ? 0.2 : 0.7) : -0.9,
        `${percent(numbers)} are short numbers`,
      ];
    }
    case 'street': {
      const streets = share('street');
      return [
        streets >= 0.4 ? streets : share('address') > 0.4 ? -0.2 : share('name') > 0.6 ? 0.2 : -0.8,
        `${percent(streets)} are streets`,
      ];
    }
    case 'unitNo': {
      const flats = share('apartment');
      const short = share('apartment', 'number', 'state', 'other');
      return [
        flats >= 0.3 && short > 0.7
          ? 0.4 + flats * 0.5
          : short > 0.7 && sample.count < sample.total * 0.6
            ? 0.2
            : -0.7,
        `${percent(flats)} are apartments`,
      ];
    }
    case 'city': {
      const names = share('name', 'street', 'other', 'apartment', 'town-line');
      const few = sample.different <= Math.max(4, sample.count * 0.35) && sample.different <= 40;
      return [
        share('name', 'street', 'town-line') >= 0.6 && share('street') < 0.5
          ? names * (few ? 0.8 - sample.different / 100 : 0.25)
          : -0.7,
        `${sample.different} different names`,
      ];
    }
    case 'state':
      return [
        share('state') >= 0.7 ? (sample.different <= 3 ? 0.9 : 0.1) : -0.8,
        'two letters each',
      ];
    case 'postcode':
      return [
        share('postcode') >= 0.6
          ? sample.different <= Math.max(5, sample.count * 0.6)
            ? 0.95
            : 0.5
          : -0.9,
        `${percent(share('postcode'))} are postcodes`,
      ];
    case 'unitKind': {
      const units = share('unit');
      return [
        units >= 0.4 ? units : sample.namesUnits >= 0.5 ? 0.3 : units > 0.15 ? 0 : -0.7,
        `${percent(units)} name a cold unit`,
      ];
    }
    case 'remarks': {
      const messages = share('message');
      const speaks = Math.max(messages, sample.meanWords >= 3 ? words * 0.7 : 0);
      return [
        speaks >= 0.25 ? Math.min(1, speaks + 0.2) : words > 0.5 ? 0 : -0.6,
        `${percent(messages)} are sentences`,
      ];
    }
    case 'powerOutAt':
    case 'powerBackAt': {
      const back = role === 'powerBackAt' ? share('yes-no') * 0.5 + sample.stillOut : 0;
      const times = when + share('duration') + back + share('number') * 0.3;
      return [
        times >= 0.4
          ? Math.min(1, times) * (sample.stillOut > 0 && role === 'powerOutAt' ? 0.5 : 0.6)
          : words > 0.5
            ? -0.2
            : -0.6,
        `${percent(when)} are times`,
      ];
    }
    case 'hoursOut':
      return [
        share('number', 'duration') >= 0.5 ? 0.9 : when > 0.5 ? -0.8 : -0.2,
        'its cells are short numbers',
      ];
    case 'medicine':
    case 'danger': {
      const flagged = role === 'medicine' ? sample.medicine : sample.danger;
      const asked = share('yes-no') + flagged;
      const isOther = share('phone', 'address') > 0.3 || when > 0.3 || sample.meanWords > 3;
      return [
        asked >= 0.3 && flagged > 0 ? Math.min(1, asked) : isOther ? -1 : asked >= 0.3 ? 0.3 : 0,
        'its cells answer it',
      ];
    }
    case 'language':
      return [
        share('language') >= 0.5 ? 0.9 : share('yes-no', 'state') > 0.5 ? 0.1 : -0.5,
        `${percent(share('language'))} are languages`,
      ];
    case 'callId': {
      const numbers = share('number', 'postcode', 'apartment', 'other');
      const ordered = sample.rising > 0.95 && sample.distinct > 0.97;
      return [
        numbers >= 0.7
          ? ordered
            ? 0.9
            : 0.2
          : share('phone') > 0.5 || share('name') > 0.5
            ? -0.9
            : 0.1,
        'a number that counts up',
      ];
    }
    case 'contents':
      return [words > 0.5 ? 0.4 : -0.4, 'its cells are words'];
    case 'detail':
      return [0.2, 'kept with the message'];
    case 'ignore':
      return share('phone') > 0.5 || share('address') > 0.5
        ? [-1, '']
        : [0.3, 'says nothing of the household'];
  }
}

/** A date and time in one column makes a second column of times something else, and so on. */
function isRival(role: ColumnRole, taken: ReadonlySet<ColumnRole>): boolean {
  if (role === 'receivedDate') return taken.has('receivedAt');
  if (role === 'receivedTime') return taken.has('receivedAt');
  if (role === 'receivedAt') return taken.has('receivedTime');
  if (role === 'firstName' || role === 'lastName') return false;
  return false;
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
  const roles = new Set([...chosen.values()].map(({ role }) => role));
  if (roles.has('receivedAt') || roles.has('receivedTime')) return;
  const best = candidates.find(
    ({ role, index }) =>
      (role === 'receivedAt' || role === 'receivedTime') &&
      ['ignore', 'detail', 'callId', undefined].includes(chosen.get(index)?.role),
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
