import type { Instant } from '@shared/domain/instant';
import { guessColumns } from '@shared/domain/night-log/guess-columns';
import type { NightCall } from '@shared/domain/night-log/night-call';
import { understandLog } from '@shared/domain/night-log/understand-log';
import type { NightLogReading } from '@shared/domain/night-log/understand-log';
import { makeNightLog } from '../../server/night-log/make-night-log';
import type { LogAddress, MadeNightLog, RowTruth } from '../../server/night-log/make-night-log';
import { readCsv } from '../../server/night-log/read-csv';
import { zoneClock } from '../../server/night-log/zone-clock';

const ZONE = 'America/New_York';
const zone = zoneClock(ZONE);
const NIGHT = {
  fromAt: zone.toInstant({ year: 2026, month: 11, day: 30, hour: 19, minute: 10 }),
  toAt: zone.toInstant({ year: 2026, month: 12, day: 1, hour: 6, minute: 50 }),
};
const SEEDS = Array.from({ length: 24 }, (_, i) => 101 + i * 7);
const ROWS = 160;

function addresses(count: number): LogAddress[] {
  const streets = [
    'Elder St',
    'Heron Point Rd',
    'Mill Run Ln',
    'Cape Loop Rd',
    'Quay Row',
    'Cove View Ct',
    'Beacon Hill Rd',
    'Lantern Ave',
    'Tern Way',
    'Hwy 12',
  ];
  const towns = ['Port Ness', 'Lower Ness', 'Gullhaven'];
  return Array.from({ length: count }, (_, i) => ({
    number: String(10 + 2 * Math.floor(i / streets.length)),
    street: streets[i % streets.length] ?? '',
    ...(i % 9 === 0 ? { unit: `${1 + (i % 4)}${'ABC'[i % 3]}` } : {}),
    city: towns[i % 3] ?? '',
    postcode: `2799${i % 3}`,
    lon: -40 + i / 10_000,
    lat: 30 + i / 10_000,
  }));
}

function read(
  made: MadeNightLog,
): NightLogReading & { offset: number; reader: ReturnType<typeof readCsv> } {
  const reader = readCsv(made.bytes);
  const map = guessColumns(
    reader.header,
    reader.rows.map(({ cells }) => cells),
  );
  const reading = understandLog(reader, map, {
    zone,
    night: { from: NIGHT.fromAt - 3_600_000, to: NIGHT.toAt + 600_000 },
    outage: { from: NIGHT.fromAt - 3_600_000, to: null },
    areaCode: '252',
    cities: ['Port Ness', 'Lower Ness', 'Gullhaven'],
  });
  // Without titles, the lines above the calls are rows as well.
  const offset = made.style.hasHeader || !made.style.titleLines ? 0 : 3;
  return { ...reading, offset, reader };
}

const kindsOf = (kinds: readonly string[]): string => [...kinds].sort().join(' + ');

interface Tally {
  rows: number;
  understandable: number;
  understood: number;
  phone: number;
  time: number;
  name: number;
  units: number;
  medicine: number;
  danger: number;
  number: number;
  powerOut: number;
  powerKnown: number;
  aside: number;
  asideMeant: number;
}

function compare(truth: RowTruth, call: NightCall, tally: Tally): void {
  const same = (a: Instant | null, b: Instant | null): boolean => a === b;
  // Who calls from another telephone and leaves the number in the message is reached on that number.
  tally.phone += [call.phone, ...call.otherPhones].some((phone) => phone?.e164 === truth.phoneE164)
    ? 1
    : 0;
  tally.time += same(call.receivedAt, truth.receivedAt) ? 1 : 0;
  tally.name += call.name?.toLowerCase() === truth.name?.toLowerCase() ? 1 : 0;
  tally.units += kindsOf(call.units.map(({ kind }) => kind)) === kindsOf(truth.unitKinds) ? 1 : 0;
  tally.medicine += call.medicine.mentioned === truth.medicine ? 1 : 0;
  tally.danger += call.dangers.length > 0 === truth.danger ? 1 : 0;
  tally.number += truth.address !== null && call.address?.number === truth.address.number ? 1 : 0;
  if (truth.powerOutAt !== null) {
    tally.powerKnown++;
    tally.powerOut +=
      same(call.powerOutAt, truth.powerOutAt) && same(call.powerBackAt, truth.powerBackAt) ? 1 : 0;
  }
}

/** One line for each seed and kind of slip, with how often it came. */
function firstOfEach(wrong: readonly string[]): string[] {
  const seen = new Map<string, { first: string; count: number }>();
  for (const line of wrong) {
    const key = line.split(':')[0] ?? '';
    const known = seen.get(key);
    if (known) known.count++;
    else seen.set(key, { first: line, count: 1 });
  }
  return [...seen.values()].map(({ first, count }) => `${count} x ${first}`);
}

describe('logs made from addresses', () => {
  const tally: Tally = {
    rows: 0,
    understandable: 0,
    understood: 0,
    phone: 0,
    time: 0,
    name: 0,
    units: 0,
    medicine: 0,
    danger: 0,
    number: 0,
    powerOut: 0,
    powerKnown: 0,
    aside: 0,
    asideMeant: 0,
  };
  const wrong: string[] = [];
  let householdsMeant = 0;
  let householdsRight = 0;
  let wronglyJoined = 0;

  beforeAll(() => {
    for (const seed of SEEDS) {
      const made = makeNightLog({
        seed,
        rows: ROWS,
        addresses: addresses(ROWS),
        night: NIGHT,
        zone: ZONE,
        typoRate: 0.06,
      });
      const reading = read(made);
      const meant = new Map<number, number[]>();
      for (const truth of made.truth) {
        tally.rows++;
        const row = reading.rows[truth.row + reading.offset];
        if (!row) throw new Error(`seed ${seed}: row ${truth.row} is missing`);
        if (truth.kind === 'call') {
          tally.understandable++;
          meant.set(truth.household, [...(meant.get(truth.household) ?? []), row.line]);
          if (row.result.kind === 'understood') {
            tally.understood++;
            const before = { ...tally };
            compare(truth, row.result.call, tally);
            if (truth.powerOutAt !== null && tally.powerOut === before.powerOut)
              wrong.push(
                `${seed} power: ${row.result.call.powerOutAt} ${row.result.call.powerBackAt} ${JSON.stringify(row.cells)}`,
              );
            for (const part of ['phone', 'time', 'name', 'units', 'medicine', 'danger'] as const) {
              if (tally[part] === before[part])
                wrong.push(`${seed} ${part}: ${JSON.stringify(row.cells)}`);
            }
          } else
            wrong.push(
              `${seed} ${row.result.kind} ${'reason' in row.result ? row.result.reason : ''}: ${JSON.stringify(row.cells)}`,
            );
        } else if (truth.kind === 'aside') {
          tally.asideMeant++;
          if (row.result.kind === 'aside') tally.aside++;
          else wrong.push(`${seed} not aside (${truth.why}): ${JSON.stringify(row.cells)}`);
        } else if (row.result.kind !== 'empty')
          wrong.push(`${seed} not empty: ${JSON.stringify(row.cells)}`);
      }
      const found = new Map(
        reading.households.flatMap(({ rows }, h) => rows.map(({ line }) => [line, h] as const)),
      );
      const owner = new Map<number, number>();
      for (const [household, lines] of meant) {
        householdsMeant++;
        const homes = new Set(lines.map((line) => found.get(line)));
        if (homes.size === 1) householdsRight++;
        for (const home of homes) {
          if (home === undefined) continue;
          if (owner.has(home) && owner.get(home) !== household) wronglyJoined++;
          owner.set(home, household);
        }
      }
    }
    const percent = (part: number, of: number): string => `${((100 * part) / of).toFixed(2)} %`;
    const { understood } = tally;
    console.info(
      [
        `${SEEDS.length} logs, ${tally.rows} rows, ${tally.understandable} understandable: ${percent(understood, tally.understandable)} understood`,
        `phone ${percent(tally.phone, understood)}, time ${percent(tally.time, understood)}, name ${percent(tally.name, understood)}, units ${percent(tally.units, understood)}`,
        `medicine ${percent(tally.medicine, understood)}, danger ${percent(tally.danger, understood)}, house number ${percent(tally.number, understood)}, power times ${percent(tally.powerOut, tally.powerKnown)}`,
        `set aside ${tally.aside} of ${tally.asideMeant}; households whole ${percent(householdsRight, householdsMeant)}, wrongly joined ${wronglyJoined}`,
        ...(process.env['NIGHT_LOG_SHOW'] ? firstOfEach(wrong) : []),
      ].join('\n'),
    );
  });

  it('are understood, and exactly', () => {
    expect(tally.understood / tally.understandable).toBeGreaterThanOrEqual(0.99);
    for (const part of [
      'phone',
      'time',
      'name',
      'units',
      'medicine',
      'danger',
      'number',
    ] as const) {
      expect([part, tally[part] / tally.understood >= 0.99]).toEqual([part, true]);
    }
    expect(tally.powerOut / tally.powerKnown).toBeGreaterThanOrEqual(0.99);
  });

  it('have every unusable row set aside', () => {
    expect(tally.aside).toBe(tally.asideMeant);
  });

  it('have their households whole, and no two joined', () => {
    expect(householdsRight / householdsMeant).toBeGreaterThanOrEqual(0.99);
    expect(wronglyJoined).toBe(0);
  });
});

describe('a made log', () => {
  it.each(SEEDS.slice(0, 12))('of seed %i has every row accounted for', (seed) => {
    const made = makeNightLog({
      seed,
      rows: 120,
      addresses: addresses(120),
      night: NIGHT,
      zone: ZONE,
    });
    const { counts, rows, reader } = read(made);
    expect(counts.calls + counts.folded + counts.aside + counts.empty).toBe(counts.rows);
    expect(counts.rows).toBe(reader.rows.length);
    expect(rows.map(({ cells }) => cells)).toEqual(reader.rows.map(({ cells }) => cells));
  });

  it.each(SEEDS.slice(0, 12))(
    'of seed %i gives the same keys when it is read again, and no key twice',
    (seed) => {
      const order = { seed, rows: 120, addresses: addresses(120), night: NIGHT, zone: ZONE };
      const keys = read(makeNightLog(order)).rows.map(({ key }) => key);
      expect(read(makeNightLog(order)).rows.map(({ key }) => key)).toEqual(keys);
      expect(new Set(keys).size).toBe(keys.length);
    },
  );

  it('is the same, byte for byte, for the same seed', () => {
    const order = { seed: 5, rows: 60, addresses: addresses(60), night: NIGHT, zone: ZONE };
    expect(makeNightLog(order)).toEqual(makeNightLog(order));
    expect(makeNightLog({ ...order, seed: 6 }).bytes).not.toEqual(makeNightLog(order).bytes);
  });
});
