import type { PocketDto, RegionDto } from '@shared/contract/areas';
import type { NightLogDto } from '@shared/contract/night-logs';
import type { RegionImportDto, RegionSwitchDto } from '@shared/contract/regions';
import type { Position } from '@shared/contract/routes';

/** What commands may announce. Nothing else in the server emits. */
export interface Live {
  /** A storm's streams have grown: tell those who listen. */
  ring(stormId: string): void;
  technicianMoved(technicianId: string, position: Position): void;
  pocketsChanged(stormId: string, pockets: readonly PocketDto[]): void;
  nightLogProgressed(log: NightLogDto): void;
  regionChanged(region: RegionDto): void;
  regionImportProgressed(progress: RegionImportDto): void;
  regionSwitchProgressed(progress: RegionSwitchDto): void;
  /** Closes the sockets of a user whose rights have changed, or of one session that is over. */
  endSockets(
    whose: { readonly userId: string } | { readonly sessionId: string },
    why: string,
  ): void;
  close(): Promise<void>;
}

/** For commands run where nobody listens: setting up a demo, a test of one command. */
export const SILENT: Live = {
  ring: () => undefined,
  technicianMoved: () => undefined,
  pocketsChanged: () => undefined,
  nightLogProgressed: () => undefined,
  regionChanged: () => undefined,
  regionImportProgressed: () => undefined,
  regionSwitchProgressed: () => undefined,
  endSockets: () => undefined,
  close: () => Promise.resolve(),
};
