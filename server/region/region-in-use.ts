import type { RegionDto } from '@shared/contract/areas';
import type { AddressSuggestion } from '@shared/contract/calls';
import type { LonLat } from '@shared/contract/common';
import type { FeederMap } from '@shared/contract/feeders';

/** The region that the application works in: its map, its zone and its addresses. */
export interface RegionInUse {
  readonly dto: RegionDto;
  /** Names of its towns, so that a written address can be cut where its town begins. */
  readonly cities: readonly string[];
  /** The circuits that its power comes by; empty lists when its data knows of none. */
  readonly power: FeederMap;
  /** Suggestions for what a call taker has typed so far, likeliest first. */
  suggest(text: string, near: LonLat | null): AddressSuggestion[];
  /** The one address that a written line means, or `null` when that is not sure enough. */
  locate(text: string): AddressSuggestion | null;
  nearest(lonLat: LonLat): AddressSuggestion | null;
}
