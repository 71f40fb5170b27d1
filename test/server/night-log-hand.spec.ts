import { addressKey, readAddress } from '@shared/domain/night-log/address-text';
import { guessColumns } from '@shared/domain/night-log/guess-columns';
import { understandLog } from '@shared/domain/night-log/understand-log';
import type { NightLogReading } from '@shared/domain/night-log/understand-log';
import { readCsv } from '../../server/night-log/read-csv';
import { zoneClock } from '../../server/night-log/zone-clock';
import { HAND_LOGS } from '../domain/night-log-hand';
import type { HandLog, MeantCall } from '../domain/night-log-hand';

const zone = zoneClock('America/New_York');
const local = (text: string): number => {
  const [year = 0, month = 0, day = 0, hour = 0, minute = 0] = text.split(/\D/).map(Number);
  return zone.toInstant({ year, month, day, hour, minute });
};
const shown = (at: number | null): string | undefined => {
  if (at === null) return undefined;
  const { year, month, day, hour, minute } = zone.toLocal(at);
  const two = (n: number): string => String(n).padStart(2, '0');
  return `${year}-${two(month)}-${two(day)} ${two(hour)}:${two(minute)}`;
};

function bytesOf({ text, windows1252 }: HandLog): Uint8Array {
  if (!windows1252) return new TextEncoder().encode(text);
  return Uint8Array.from([...text].map((letter) => (letter === '’' ? 0x92 : letter.charCodeAt(0))));
}

function read(log: HandLog): NightLogReading {
  const file = readCsv(bytesOf(log));
  const map = guessColumns(
    file.header,
    file.rows.map(({ cells }) => cells),
  );
  return understandLog(file, map, {
    zone,
    night: { from: local('2026-11-30 18:00'), to: local('2026-12-01 07:30') },
    outage: { from: local('2026-11-30 18:40'), to: null },
    areaCode: '252',
  });
}

const EMPTY = { whole: '', number: '', street: '', unit: '', city: '', state: '', postcode: '' };
const place = (text: string | null): string | null => {
  const address = text === null ? null : readAddress({ ...EMPTY, whole: text });
  return address && (addressKey(address) ?? address.street?.toLowerCase() ?? null);
};

describe.each(HAND_LOGS.map((log) => [log.name, log] as const))('%s', (_, log) => {
  const reading = read(log);

  it('is read as it was meant', () => {
    const calls = reading.households.map(({ call, rows }): MeantCall => ({
      at: shown(call.receivedAt) ?? '',
      name: call.name,
      phone: call.phone?.e164 ?? null,
      place:
        call.address && (addressKey(call.address) ?? call.address.street?.toLowerCase() ?? null),
      ...(call.address?.unitNo ? { unitNo: call.address.unitNo } : {}),
      units: call.units.map(({ kind }) => kind).join(' + '),
      ...(call.medicine.mentioned ? { medicine: true as const } : {}),
      ...(call.dangers.length > 0 ? { dangers: call.dangers } : {}),
      ...(call.language ? { language: call.language } : {}),
      lines: rows.map(({ line }) => line),
      ...(call.powerOutAt ? { out: shown(call.powerOutAt) } : {}),
      ...(call.powerBackAt ? { back: shown(call.powerBackAt) } : {}),
    }));
    expect(calls).toEqual(log.calls.map((call) => ({ ...call, place: place(call.place) })));
  });

  it('sets aside what a person has to look at, with the reason', () => {
    const aside = reading.rows.flatMap(({ line, result }) =>
      result.kind === 'aside' ? [[line, result.reason] as const] : [],
    );
    expect(aside.map(([line]) => line)).toEqual(Object.keys(log.aside).map(Number));
    for (const [line, reason] of aside) expect(reason).toMatch(log.aside[line] ?? /never/);
  });

  it('accounts for every row', () => {
    const empty = reading.rows.flatMap(({ line, result }) =>
      result.kind === 'empty' ? [line] : [],
    );
    expect(empty).toEqual(log.empty);
    const { rows, calls, folded, aside } = reading.counts;
    expect(calls + folded + aside + reading.counts.empty).toBe(rows);
  });
});
