import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { FeederDto } from '@shared/contract/feeders';
import type { LonLat } from '@shared/contract/common';
import { conclude, nextQuestion } from '@shared/domain/phone-check/phone-check';
import type { Dice } from '@shared/domain/simulation/dice';
import type { StormCall } from '@shared/domain/simulation/storm';
import { type Chance, demoCall } from '../demo/demo-calls';
import type { DrillClock } from './drill-clock';
import type { DrillTally } from './drill-tally';
import type { PersonAtWork } from './person-at-work';

const HOUR_MS = 3_600_000;
const MOST_QUESTIONS = 40;

export interface Desk {
  readonly stormId: string;
  readonly dispatchers: readonly PersonAtWork[];
  readonly feeders: readonly FeederDto[];
  readonly centre: LonLat;
  readonly clock: DrillClock;
  readonly tally: DrillTally;
  readonly dice: Dice;
  readonly chance: Chance;
  /** First of the invented area codes of this drill. */
  readonly areaCode: number;
  /** Whether households agree to texts: only where no text goes to anybody. */
  readonly mayText: boolean;
}

/** Takes one call, checks it by phone, and settles it or leaves it for a visit. */
export async function playCall(
  desk: Desk,
  call: Pick<StormCall, 'calledAt' | 'readyAt' | 'cancelledAt'>,
  number: number,
  needsVisit: boolean,
): Promise<void> {
  const { clock, tally } = desk;
  const dispatcher = desk.dispatchers[number % desk.dispatchers.length]!;
  if (!(await clock.until(call.calledAt))) return;
  const taken = await tally.step(() => takeCall(desk, dispatcher, number));
  if (!taken) return;
  tally.taken++;
  if (!(await clock.until(call.readyAt))) return;
  const checked = await tally.step(() => checkByPhone(desk, dispatcher, taken, needsVisit));
  if (!checked) return;
  if (checked.row.state !== 'waiting') {
    tally.settledByPhone++;
    return;
  }
  tally.needVisits++;
  if (call.cancelledAt === Infinity || !(await clock.until(call.cancelledAt))) return;
  await tally.step(() => callOff(dispatcher, taken.row.id, tally));
}

async function takeCall(desk: Desk, dispatcher: PersonAtWork, number: number): Promise<CallDetail> {
  const { chance, dice } = desk;
  const near = pointOnFeeder(desk);
  const { suggestion } = await dispatcher.call('nearestAddress', {
    query: { lon: near[0].toFixed(6), lat: near[1].toFixed(6) },
  });
  const now = Date.now();
  const outAt = Math.round(now - dice.between(1, 6) * HOUR_MS);
  const backAt = Math.round(now - dice.between(0.2, 0.9) * HOUR_MS);
  const door = { at: near, number: '', street: '', city: '', postcode: '', flats: 1 };
  const times = { receivedAt: now, outAt, backAt };
  const { receivedAt: _, source: __, ...told } = demoCall(chance, door, number, times);
  return dispatcher.call('takeCall', {
    params: { stormId: desk.stormId },
    body: {
      ...told,
      phone: `+1${desk.areaCode + Math.floor(number / 100)}55501${String(number % 100).padStart(2, '0')}`,
      mayText: desk.mayText && told.mayText,
      timesFrom: 'caller',
      callId: randomUUID(),
      address: suggestion
        ? { text: suggestion.label, unitNo: '', lonLat: suggestion.lonLat, kind: suggestion.kind }
        : { text: 'By the pin', unitNo: '', lonLat: near, kind: 'pin' },
    },
  });
}

/** Asks what the check asks; answers are drawn, but none that ends it, where a visit is needed. */
async function checkByPhone(
  { dice }: Desk,
  dispatcher: PersonAtWork,
  taken: CallDetail,
  needsVisit: boolean,
): Promise<CallDetail> {
  const params = { callId: taken.row.id };
  const claimed = await dispatcher.call('claimCall', { params, body: {} });
  const unit = claimed.units[0]!;
  const answers: Record<string, string> = {};
  for (let asked = 0; asked < MOST_QUESTIONS; asked++) {
    const question = nextQuestion(answers, unit);
    if (!question) break;
    const harmless = question.answers.filter(({ ends }) => ends === undefined);
    if (harmless.length === 0) break;
    // The questions on safety come first, and in a drill nothing burns.
    answers[question.id] = (question.section === 'safety' ? harmless[0]! : dice.pick(harmless)).id;
    if (conclude(answers, unit).outcome !== null) break;
  }
  const answered = await dispatcher.call('answerPhoneCheck', {
    params,
    body: { version: claimed.row.version, answers },
  });
  return dispatcher.call('concludeCall', {
    params,
    body: {
      version: answered.row.version,
      outcome: needsVisit ? 'waiting' : dice.chance(0.75) ? 'running-again' : 'referred',
      reason: '',
    },
  });
}

/** A household says that it is no longer needed, unless somebody is at the door already. */
async function callOff(dispatcher: PersonAtWork, callId: string, tally: DrillTally): Promise<void> {
  const { row } = await dispatcher.call('readCall', { params: { callId } });
  if (!['waiting', 'planned', 'offered', 'accepted'].includes(row.state)) return;
  await dispatcher.call('concludeCall', {
    params: { callId },
    body: { version: row.version, outcome: 'cancelled', reason: 'Runs again by itself' },
  });
  tally.calledOff++;
}

/** Somewhere near the streets of a feeder; around the middle where the region knows none. */
function pointOnFeeder({ feeders, centre, dice }: Desk): LonLat {
  const line = feeders.length > 0 ? dice.pick(feeders).trunk.flat() : [];
  const [lon, lat] = line.length > 0 ? dice.pick(line) : centre;
  const reach = line.length > 0 ? 0.004 : 0.03;
  return [lon + dice.between(-reach, reach), lat + dice.between(-reach, reach)];
}
