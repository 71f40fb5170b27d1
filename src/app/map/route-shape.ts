import type { LonLat } from '@shared/contract/common';
import type { PlanDto, StopDto, TechnicianDto } from '@shared/contract/routes';
import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import type { Way } from './way';
import { toWorld, type WorldPoint } from './world';

/** From here on a position is old: a van may be anywhere by now. */
export const OLD_POSITION_MINUTES = 15;

export interface RouteLeg {
  readonly from: WorldPoint;
  readonly to: WorldPoint;
  /** Along the roads; `null` while it is not known, or where no road leads. */
  readonly way: Way | null;
  /** The technician has said yes to it. */
  readonly isFirm: boolean;
  readonly order: number;
}

/** A technician and what is left of the route, projected once. */
export interface RouteShape {
  readonly technician: Pick<TechnicianDto, 'id'>;
  readonly at: WorldPoint;
  readonly initials: string;
  /** The age of the position, such as "4 min"; empty when there is none. */
  readonly age: string;
  readonly isOld: boolean;
  readonly legs: readonly RouteLeg[];
}

/** A route as a proposal has it. */
export interface ProposedRoute {
  readonly technicianId: string;
  readonly legs: readonly RouteLeg[];
}

export interface RouteGround {
  /** Where a call is, as far as anybody knows. */
  readonly placeOf: (callId: string) => LonLat | null;
  readonly wayOf: (from: LonLat, to: LonLat) => Way | null;
}

const isFirm = ({ state }: StopDto): boolean =>
  state === 'accepted' || state === 'travelling' || state === 'on-site';

const startOf = ({ position, start }: TechnicianDto): LonLat => position?.lonLat ?? start;

export function routeShape(
  technician: TechnicianDto,
  stops: readonly StopDto[],
  ground: RouteGround,
  now: Instant,
  ageWords: (lengthMs: number) => string,
): RouteShape {
  const { position } = technician;
  return {
    technician,
    at: toWorld(startOf(technician)),
    initials: initialsOf(technician.name),
    age: position ? ageWords(now - position.at) : '',
    isOld: !position || now - position.at > OLD_POSITION_MINUTES * MINUTE_MS,
    legs: legsOf(
      startOf(technician),
      stops.map((stop) => ({ callId: stop.callId, isFirm: isFirm(stop) })),
      ground,
    ),
  };
}

export const proposedRoute = (
  technician: TechnicianDto,
  { stops }: PlanDto['routes'][number],
  ground: RouteGround,
): ProposedRoute => ({
  technicianId: technician.id,
  legs: legsOf(
    startOf(technician),
    stops.map(({ callId, firm }) => ({ callId, isFirm: firm })),
    ground,
  ),
});

function legsOf(
  start: LonLat,
  stops: readonly { readonly callId: string; readonly isFirm: boolean }[],
  { placeOf, wayOf }: RouteGround,
): RouteLeg[] {
  const legs: RouteLeg[] = [];
  let from = start;
  for (const [i, { callId, isFirm: firm }] of stops.entries()) {
    const to = placeOf(callId);
    if (!to) continue;
    legs.push({
      from: toWorld(from),
      to: toWorld(to),
      way: wayOf(from, to),
      isFirm: firm,
      order: i + 1,
    });
    from = to;
  }
  return legs;
}

/** "AR" of "Ana Ruiz", "J" of "Jo". */
export function initialsOf(name: string): string {
  const words = name.split(/\s+/).filter(Boolean);
  const [first = ''] = words;
  const last = words.length > 1 ? (words.at(-1) ?? '') : '';
  return `${[...first][0] ?? ''}${[...last][0] ?? ''}`.toUpperCase();
}
