import type { CallDetail } from '@shared/contract/calls';
import { STATE_WORDS } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import { UNIT_WORDS } from './compartment-words';

/**
 * What is different in a call since the reader last saw it, in words; for whoever was refused
 * because somebody else changed it first.
 *
 * @param clock tells a moment as the region's time
 */
export function changesBetween(
  before: CallDetail,
  after: CallDetail,
  clock: (at: Instant) => string,
): string[] {
  const changes: string[] = [];
  const tell = (what: string, from: string, to: string) => {
    if (from !== to) changes.push(`${what}: ${from || 'nothing'}, now ${to || 'nothing'}`);
  };
  tell('State', STATE_WORDS[before.row.state], STATE_WORDS[after.row.state]);
  tell('Name', before.row.name, after.row.name);
  tell('Phone', before.row.phone ?? '', after.row.phone ?? '');
  tell('Address', addressOf(before), addressOf(after));
  tell('Power went', clock(before.powerOutAt), clock(after.powerOutAt));
  tell('Power back', backOf(before, clock), backOf(after, clock));
  tell('Units', unitsOf(before), unitsOf(after));
  tell('Claimed by', before.row.claim?.name ?? 'nobody', after.row.claim?.name ?? 'nobody');
  if (unitFacts(before) !== unitFacts(after) && unitsOf(before) === unitsOf(after)) {
    changes.push('What is known of the units was changed');
  }
  const answers = differingAnswers(before, after);
  if (answers > 0) {
    changes.push(`${answers} ${answers === 1 ? 'answer' : 'answers'} of the phone check changed`);
  }
  const remarks = after.remarks.length - before.remarks.length;
  if (remarks > 0) changes.push(`${remarks} new ${remarks === 1 ? 'remark' : 'remarks'}`);
  return changes;
}

const addressOf = ({ row: { address } }: CallDetail): string =>
  address.unitNo ? `${address.text}, ${address.unitNo}` : address.text;

const backOf = ({ powerBackAt }: CallDetail, clock: (at: Instant) => string): string =>
  powerBackAt === null ? 'still out' : clock(powerBackAt);

const unitsOf = ({ units }: CallDetail): string =>
  units.map(({ kind }) => UNIT_WORDS[kind]).join(', ');

const unitFacts = ({ units }: CallDetail): string => JSON.stringify(units);

function differingAnswers(before: CallDetail, after: CallDetail): number {
  const ids = new Set([
    ...Object.keys(before.phoneCheck.answers),
    ...Object.keys(after.phoneCheck.answers),
  ]);
  return [...ids].filter((id) => before.phoneCheck.answers[id] !== after.phoneCheck.answers[id])
    .length;
}
