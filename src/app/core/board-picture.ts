import type { AreaDto } from '@shared/contract/areas';
import type { BoardPicture } from '@shared/contract/board';
import type { CallRow } from '@shared/contract/calls';
import type { Settings, StormDto } from '@shared/contract/office';
import type { BoardChange } from '@shared/contract/realtime';
import type { PlanDto, StopDto, TechnicianDto } from '@shared/contract/routes';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { type AutomaticDone, automaticDoneOf } from '@shared/domain/automatic-done';

/** The board's rows by id. Immutable: a change makes a new one that shares what did not change. */
export interface Picture {
  readonly storm: StormDto;
  readonly calls: ReadonlyMap<string, CallRow>;
  readonly technicians: ReadonlyMap<string, TechnicianDto>;
  /** Stops that are still to be done. */
  readonly stops: ReadonlyMap<string, StopDto>;
  readonly areas: ReadonlyMap<string, AreaDto>;
  readonly stormRoads: ReadonlyMap<string, StormRoadDto>;
  /** A proposal that nobody has published or discarded. */
  readonly plan: PlanDto | null;
  /** `null` when a person published the routes in force, or nobody did. */
  readonly automaticDone: AutomaticDone | null;
  /** Newer than the sign-in's, when they were changed since. */
  readonly settings: Settings | null;
  /** Counts the changes that had texts in them, for lists of texts to look again. */
  readonly messagesTick: number;
}

export const pictureOf = (sent: BoardPicture): Picture => ({
  storm: sent.storm,
  calls: byId(sent.calls),
  technicians: byId(sent.technicians),
  stops: byId(sent.stops),
  areas: byId(sent.areas),
  stormRoads: byId(sent.stormRoads),
  plan: sent.plan,
  automaticDone: sent.automaticDone,
  settings: null,
  messagesTick: 0,
});

/** The picture after these changes, in their order. A row never gives way to an older version. */
export function afterChanges(picture: Picture, changes: readonly BoardChange[]): Picture {
  const draft = new PictureDraft(picture);
  for (const change of changes) draft.apply(change);
  return draft.finish();
}

/** Copies each map at most once, however many changes there are. */
class PictureDraft {
  private next: Picture;

  constructor(private readonly before: Picture) {
    this.next = before;
  }

  apply(change: BoardChange): void {
    switch (change.kind) {
      case 'calls':
        this.write('calls', this.next.calls, change.calls);
        break;
      case 'technicians':
        this.write(
          'technicians',
          this.next.technicians,
          change.technicians.map((row) => this.withNewestPosition(row)),
        );
        break;
      case 'stops':
        this.writeStops(change.stops);
        break;
      case 'areas':
        this.write('areas', this.next.areas, change.areas);
        this.remove('areas', change.gone);
        break;
      case 'storm-roads':
        this.write('stormRoads', this.next.stormRoads, change.roads);
        this.remove('stormRoads', change.gone);
        break;
      case 'plan':
        this.writePlan(change.plan);
        break;
      case 'messages':
        this.next = { ...this.next, messagesTick: this.next.messagesTick + 1 };
        break;
      case 'storm':
        if (change.storm.version >= this.next.storm.version) {
          this.next = { ...this.next, storm: change.storm };
        }
        break;
      case 'settings':
        this.next = { ...this.next, settings: change.settings };
        break;
    }
  }

  finish(): Picture {
    return this.next;
  }

  private write<R extends Row>(
    name: RowsName,
    known: ReadonlyMap<string, R>,
    rows: readonly R[],
  ): void {
    // Equal versions pass: the stream's order is the commits' order, and not all that a row
    // shows (a claim, unread texts) counts as a version of it.
    const newer = rows.filter((row) => (known.get(row.id)?.version ?? -1) <= row.version);
    if (newer.length === 0) return;
    const map = this.own<R>(name);
    for (const row of newer) map.set(row.id, row);
  }

  private writeStops(stops: readonly StopDto[]): void {
    this.write('stops', this.next.stops, stops.filter(isToBeDone));
    const known = this.next.stops;
    this.remove(
      'stops',
      stops
        .filter((s) => !isToBeDone(s) && (known.get(s.id)?.version ?? -1) <= s.version)
        .map((s) => s.id),
    );
  }

  private writePlan(plan: PlanDto): void {
    const shown = this.next.plan;
    if (plan.state === 'published')
      this.next = { ...this.next, automaticDone: automaticDoneOf(plan) };
    if (plan.state === 'proposed') {
      if (shown?.id === plan.id && shown.version > plan.version) return;
      if (shown && shown.id !== plan.id && shown.proposedAt > plan.proposedAt) return;
      this.next = { ...this.next, plan };
    } else if (shown?.id === plan.id) {
      this.next = { ...this.next, plan: null };
    }
  }

  private withNewestPosition(row: TechnicianDto): TechnicianDto {
    const known = this.next.technicians.get(row.id)?.position;
    return known && known.at > (row.position?.at ?? 0) ? { ...row, position: known } : row;
  }

  private remove(name: 'stops' | 'areas' | 'stormRoads', ids: readonly string[]): void {
    const gone = ids.filter((id) => this.next[name].has(id));
    if (gone.length === 0) return;
    const map = this.own<unknown>(name);
    for (const id of gone) map.delete(id);
  }

  /** A map of this draft's own, so that the picture before stays as it was. */
  private own<R>(name: RowsName): Map<string, R> {
    if (this.next[name] === this.before[name]) {
      this.next = { ...this.next, [name]: new Map<string, unknown>(this.next[name]) };
    }
    return this.next[name] as unknown as Map<string, R>;
  }
}

type RowsName = 'calls' | 'technicians' | 'stops' | 'areas' | 'stormRoads';

interface Row {
  readonly id: string;
  readonly version: number;
}

/** Whether a stop still belongs to a route; `pulled`, `declined` and `done` ones are history. */
export const isToBeDone = (stop: StopDto): boolean =>
  stop.state !== 'done' && stop.state !== 'declined' && stop.state !== 'pulled';

const byId = <Row extends { readonly id: string }>(rows: readonly Row[]): Map<string, Row> =>
  new Map(rows.map((row) => [row.id, row]));
