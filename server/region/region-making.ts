import type { AddressBook } from './address-points';
import type { OsmExtract } from './osm-extract';
import type { AddressFileReport, LeftOut, RegionCounts } from './region-data';

/** The parts of an import, in the words that progress is told in. */
export type StepName =
  'reading' | 'addresses' | 'feeders' | 'roads' | 'map' | 'house numbers' | 'done';

export interface ImportStep {
  readonly step: StepName;
  /** Share of the whole import that is done, 0 to 1. */
  readonly share: number;
}

/** A region while it is made. A step may use what the steps before it have left here. */
export interface RegionMaking {
  /** The workshop: what a step writes here is in the region's folder once all steps are done. */
  readonly folder: string;
  readonly extract: OsmExtract;
  readonly addressFile: AddressFile | null;
  /** Empty until the step `addresses` is done. */
  book: AddressBook;
  addressFileReport: AddressFileReport | null;
  /** Whether the map's ground is sea with land drawn on it; known once the step `map` is done. */
  hasCoastline: boolean;
  /** Says on the result page what was not taken over, and why. */
  leaveOut(leftOut: LeftOut): void;
}

/** A file of address points that is merged with those of the extract. */
export interface AddressFile {
  readonly path: string;
  /** As the data's licence asks for it; empty when it asks for none. */
  readonly attribution: string;
}

/** One part of making a region. */
export interface MakingStep {
  readonly name: StepName;
  /** Its part of the time that an import takes, beside the other steps' weights. */
  readonly weight: number;
  /**
   * Writes into the workshop.
   *
   * @param tell is told the share of this step that is done, 0 to 1
   * @returns what it counted
   */
  run(making: RegionMaking, tell: (share: number) => void): Promise<Partial<RegionCounts>>;
}
