import type { StopDto, TechnicianDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import type { IconName } from '../ui/icons';

export type StopState = StopDto['state'];

/** Each state by a word and a shape of its own, never by colour alone. */
export const STOP_STATE_WORDS: Readonly<
  Record<StopState, { readonly word: string; readonly icon: IconName }>
> = {
  planned: { word: 'Planned', icon: 'radio-button-unchecked' },
  offered: { word: 'Offered', icon: 'send' },
  accepted: { word: 'Accepted', icon: 'check-circle' },
  travelling: { word: 'On the way', icon: 'van' },
  'on-site': { word: 'On site', icon: 'build' },
  done: { word: 'Done', icon: 'check' },
  declined: { word: 'Declined', icon: 'cancel' },
  pulled: { word: 'Pulled', icon: 'undo' },
};

/** The states that a stop on a route may be in, in their order. */
export const LEGEND_STATES = (
  ['planned', 'offered', 'accepted', 'travelling', 'on-site'] as const
).map((state) => ({ state, ...STOP_STATE_WORDS[state] }));

/** Whether the technician holds the stop by their own word; nobody moves it then. */
export const isFirmStop = ({ state }: StopDto): boolean =>
  state === 'accepted' || state === 'travelling' || state === 'on-site';

export const isUnderWay = ({ state }: StopDto): boolean =>
  state === 'travelling' || state === 'on-site';

/** Whether a refusal's `current` is a stop. */
export const isStop = (value: unknown): value is StopDto =>
  typeof value === 'object' &&
  value !== null &&
  'technicianId' in value &&
  'callId' in value &&
  'state' in value &&
  'version' in value;

/** What is different in a stop since the reader last saw it, for whoever was refused because of it. */
export function stopChanges(
  before: StopDto,
  after: StopDto,
  technicians: ReadonlyMap<string, Pick<TechnicianDto, 'name'>>,
  clock: (at: Instant) => string,
): string[] {
  const changes: string[] = [];
  const tell = (what: string, from: string, to: string): void => {
    if (from !== to) changes.push(`${what}: ${from}, now ${to}`);
  };
  const nameOf = (id: string): string => technicians.get(id)?.name ?? 'another technician';
  tell('State', STOP_STATE_WORDS[before.state].word, STOP_STATE_WORDS[after.state].word);
  tell('Technician', nameOf(before.technicianId), nameOf(after.technicianId));
  tell('Place on the route', String(before.position + 1), String(after.position + 1));
  tell('Arrival', clock(before.etaAt ?? before.arriveAt), clock(after.etaAt ?? after.arriveAt));
  tell('Lock', before.locked ? 'locked' : 'free', after.locked ? 'locked' : 'free');
  return changes;
}
