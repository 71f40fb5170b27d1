import type {
  ComparisonOptions,
  PolicyName,
  PolicyRun,
  PolicyTable,
  Spread,
} from '@shared/domain/simulation/compare-policies';

interface Column {
  readonly head: string;
  readonly of: (figures: Readonly<Record<keyof PolicyRun, Spread>>) => string;
}

const plain =
  (name: keyof PolicyRun, digits: number): Column['of'] =>
  (figures) =>
    `${figures[name].mean.toFixed(digits)}±${figures[name].deviation.toFixed(digits)}`;
const percent =
  (name: keyof PolicyRun): Column['of'] =>
  (figures) =>
    (100 * figures[name].mean).toFixed(1);

const COLUMNS: readonly Column[] = [
  { head: 'saved $', of: plain('valueSaved', 0) },
  { head: 'lost $', of: ({ valueLost }) => valueLost.mean.toFixed(0) },
  { head: 'freezer %', of: percent('freezersInTime') },
  { head: 'fridge %', of: percent('fridgesInTime') },
  { head: 'medicine %', of: percent('medicineInTime') },
  { head: 'windows %', of: percent('windowsKept') },
  { head: 'visits', of: plain('visits', 0) },
  { head: 'min/stop', of: plain('driveMinutesPerStop', 1) },
  { head: 'driven min', of: ({ driveMinutes }) => driveMinutes.mean.toFixed(0) },
  { head: 'wait h', of: plain('waitHoursAll', 1) },
  { head: 'overtime h', of: plain('overtimeHours', 1) },
  { head: 'changed %', of: percent('changedSoon') },
  { head: 'plans', of: ({ plans }) => plans.mean.toFixed(0) },
  { head: 'invalid', of: ({ invalidPlans }) => String(invalidPlans.most) },
];

/** The comparison as a table, and how the planner stands to each other way. */
export function tableInWords(
  table: PolicyTable,
  { seeds, calls, technicians }: Pick<ComparisonOptions, 'seeds' | 'calls' | 'technicians'>,
): string {
  const rows = Object.entries(table) as [PolicyName, NonNullable<PolicyTable[PolicyName]>][];
  const cells = [
    ['', ...COLUMNS.map(({ head }) => head)],
    ...rows.map(([policy, figures]) => [policy, ...COLUMNS.map(({ of }) => of(figures))]),
  ];
  const widths = cells[0]!.map((_, column) => Math.max(...cells.map((row) => row[column]!.length)));
  const lines = cells.map((row) =>
    row
      .map((cell, column) => (column ? cell.padStart(widths[column]!) : cell.padEnd(widths[0]!)))
      .join('  '),
  );
  return [
    `${seeds.length} storms (${seeds[0]} to ${seeds.at(-1)}), ${calls} calls, ${technicians} technicians; means over the storms, ± standard deviation`,
    '',
    ...lines,
    '',
    ...ratios(table),
    '',
  ].join('\n');
}

function ratios(table: PolicyTable): string[] {
  const { thawline, ...others } = table;
  if (!thawline) return [];
  return Object.entries(others).map(([policy, other]) => {
    const times = (name: keyof PolicyRun): number => thawline[name].mean / other[name].mean;
    const change = (name: keyof PolicyRun): string =>
      `${times(name) >= 1 ? '+' : ''}${(100 * (times(name) - 1)).toFixed(0)} %`;
    return `thawline against ${policy}: saves ${times('valueSaved').toFixed(3)} times the value, drives ${change('driveMinutesPerStop')} a stop, makes ${change('visits')} visits`;
  });
}
