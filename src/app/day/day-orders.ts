import type { SentBodyOf } from '@shared/contract/http';
import type { StopCard } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';

/** What a technician tells about a stop. */
export const DAY_ROUTES = [
  'acceptStop',
  'declineStop',
  'startTravel',
  'tellEta',
  'arrive',
  'finishStop',
] as const;
export type DayRoute = (typeof DAY_ROUTES)[number];

/** One such message, complete, so that a repeat after lost signal is the very same command. */
export interface DayOrder<K extends DayRoute = DayRoute> {
  readonly route: K;
  readonly stopId: string;
  readonly body: SentBodyOf<K>;
  /** What the person did, as the phone says it back: "Accepted call 214". */
  readonly label: string;
  readonly at: Instant;
}

/** Whether a draft is an order; an older program may have written it. */
export const isOrder = (value: unknown): value is DayOrder =>
  typeof value === 'object' &&
  value !== null &&
  'route' in value &&
  (DAY_ROUTES as readonly unknown[]).includes(value.route) &&
  'stopId' in value &&
  typeof value.stopId === 'string' &&
  'label' in value &&
  typeof value.label === 'string' &&
  'at' in value &&
  typeof value.at === 'number' &&
  'body' in value &&
  typeof value.body === 'object' &&
  value.body !== null &&
  'commandId' in value.body &&
  'version' in value.body;

/** Whether a refusal's `current` is a stop's card. */
export const isCard = (value: unknown): value is StopCard =>
  typeof value === 'object' &&
  value !== null &&
  'stop' in value &&
  'callNumber' in value &&
  'units' in value;

/** Under which name a half-filled form about a stop, or its running wait, is kept. */
export const formDraftKey = (form: 'decline' | 'finish' | 'wait', stopId: string): string =>
  `day-${form}-${stopId}`;
