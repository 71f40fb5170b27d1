import type { AreaDto, PocketDto, RegionDto } from './areas';
import type { CallRow } from './calls';
import type { MessageDto } from './messages';
import type { NightLogDto } from './night-logs';
import type { Settings, StormDto } from './office';
import type { RegionImportDto, RegionSwitchDto } from './regions';
import type { PlanDto, Position, StopCard, StopDto, TechnicianDto } from './routes';
import type { StormRoadDto } from './storm-roads';

/**
 * One change to the picture that dispatchers, managers and owners share. It carries whole rows,
 * so that applying it twice does no harm.
 */
export type BoardChange =
  | { readonly kind: 'calls'; readonly calls: readonly CallRow[] }
  | { readonly kind: 'stops'; readonly stops: readonly StopDto[] }
  | { readonly kind: 'areas'; readonly areas: readonly AreaDto[]; readonly gone: readonly string[] }
  | {
      readonly kind: 'storm-roads';
      readonly roads: readonly StormRoadDto[];
      readonly gone: readonly string[];
    }
  | { readonly kind: 'technicians'; readonly technicians: readonly TechnicianDto[] }
  | { readonly kind: 'plan'; readonly plan: PlanDto }
  | { readonly kind: 'messages'; readonly messages: readonly MessageDto[] }
  | { readonly kind: 'storm'; readonly storm: StormDto }
  | { readonly kind: 'settings'; readonly settings: Settings };

/** One change to a technician's own day. */
export type DayChange =
  | { readonly kind: 'stop'; readonly card: StopCard }
  | { readonly kind: 'gone'; readonly stopId: string; readonly reason: string }
  | { readonly kind: 'technician'; readonly technician: TechnicianDto };

/** Changes are numbered from 1 without gaps within a stream, in the order of their commits. */
export interface Numbered<C> {
  readonly stormId: string;
  readonly n: number;
  readonly change: C;
}

export type FeedAnswer<C> =
  | { readonly kind: 'changes'; readonly changes: readonly Numbered<C>[] }
  /** Too much was missed, or another storm is open: fetch the whole picture again. */
  | { readonly kind: 'start-over' };

/** What the server announces. Only rooms that may see it get it. */
export interface ServerEvents {
  'board:changed': (change: Numbered<BoardChange>) => void;
  'day:changed': (change: Numbered<DayChange>) => void;
  /** A position is worth nothing once a newer one is known, so it is not numbered. */
  'technician:moved': (technicianId: string, position: Position) => void;
  /** Worked out again from the calls; the newest set replaces the one before. */
  'pockets:changed': (stormId: string, pockets: readonly PocketDto[]) => void;
  'night-log:progressed': (log: NightLogDto) => void;
  /** Another region is in use: its map, its zone, its addresses. */
  'region:changed': (region: RegionDto) => void;
  /** To owners, who alone import regions and switch between them. */
  'region:import-progressed': (progress: RegionImportDto) => void;
  'region:switch-progressed': (progress: RegionSwitchDto) => void;
  /** The session is over or the rights have changed; the socket closes next. */
  'session:ended': (reason: string) => void;
}

/** What a client may ask of the socket. Every change goes by HTTP. */
export interface ClientEvents {
  'board:resume': (
    from: { stormId: string; after: number },
    answer: (missed: FeedAnswer<BoardChange>) => void,
  ) => void;
  'day:resume': (
    from: { stormId: string; after: number },
    answer: (missed: FeedAnswer<DayChange>) => void,
  ) => void;
}
