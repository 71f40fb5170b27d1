import type { RegionDto } from '@shared/contract/areas';
import type { AddressSuggestion } from '@shared/contract/calls';
import type { LonLat } from '@shared/contract/common';
import type { FeederMap } from '@shared/contract/feeders';
import type { Nearness } from './nearness';

/** The region that the application works in: its map, its zone and its addresses. */
export interface RegionInUse {
  /** The name of its folder. */
  readonly key: string;
  readonly dto: RegionDto;
  /** Names of its towns, so that a written address can be cut where its town begins. */
  readonly cities: readonly string[];
  /** The circuits that its power comes by; empty lists when its data knows of none. */
  readonly power: FeederMap;
  /**
   * Suggestions for what a call taker has typed so far, likeliest first.
   *
   * @param near where callers are expected: comes first among equals
   */
  suggest(text: string, near: Nearness | null): AddressSuggestion[];
  /** The one address that a written line means, or `null` when that is not sure enough. */
  locate(text: string): AddressSuggestion | null;
  nearest(lonLat: LonLat): AddressSuggestion | null;
}

/**
 * The region in use, which may become another one while the server runs. Whoever asks it gets the
 * answer of the region that is in use at that moment.
 */
export class RegionHolder implements RegionInUse {
  constructor(private current: RegionInUse) {}

  /** What is in use now, for work that must stay with one region from its beginning to its end. */
  get now(): RegionInUse {
    return this.current;
  }

  get key(): string {
    return this.current.key;
  }

  get dto(): RegionDto {
    return this.current.dto;
  }

  get cities(): readonly string[] {
    return this.current.cities;
  }

  get power(): FeederMap {
    return this.current.power;
  }

  switchTo(next: RegionInUse): void {
    this.current = next;
  }

  suggest(text: string, near: Nearness | null): AddressSuggestion[] {
    return this.current.suggest(text, near);
  }

  locate(text: string): AddressSuggestion | null {
    return this.current.locate(text);
  }

  nearest(lonLat: LonLat): AddressSuggestion | null {
    return this.current.nearest(lonLat);
  }
}
