import type { Logger } from 'pino';
import type { Sequelize } from 'sequelize';
import type { Instant } from '@shared/domain/instant';
import type { Config } from './config';
import type { LogReaderPort } from './night-log/log-reader';
import type { Live } from './realtime/live';
import type { RegionHolder } from './region/region-in-use';
import type { RegionImporterPort } from './region/region-importer';
import type { ForecastPort, PlannerPort, PocketsPort, RoadsPort } from './workers/ports';

/** What every command and query may reach. Made once, in main.ts or by a test. */
export interface Context {
  readonly config: Config;
  readonly sequelize: Sequelize;
  readonly log: Logger;
  /** The only clock; tests set it. */
  readonly clock: () => Instant;
  readonly live: Live;
  /** May become another region at any moment. */
  readonly region: RegionHolder;
  readonly regionImporter: RegionImporterPort;
  readonly planner: PlannerPort;
  readonly pockets: PocketsPort;
  readonly forecast: ForecastPort;
  /** Null for a region without roads; then drives are straight lines, and say so. */
  readonly roads: RoadsPort | null;
  readonly logReader: LogReaderPort;
  /** Tells the outbox worker that a text is waiting, so that it need not poll fast. */
  readonly wakeOutbox: () => void;
}
