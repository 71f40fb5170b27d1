import type { RoutingOptions } from '../support/made-routing';

/**
 * Cheapest plans that our own runs have found for the snapshots of the planner's bench, by number of calls: of
 * runs of up to 30 s of processor time. They are no optima.
 */
export const SNAPSHOT_PRICES = {
  50: 10_547.04,
  150: 50_692.19,
  400: 157_386.25,
  1000: 324_139.89,
} as const;

/** Made-up routing instances, each with the shortest way that our own runs of up to 20 s have found. */
export const MADE_ROUTING: readonly (RoutingOptions & { readonly best: number })[] = [
  { customers: 200, geometry: 'random', isLongDay: false, seed: 3, best: 31448.87 },
  { customers: 200, geometry: 'clustered', isLongDay: false, seed: 3, best: 22651.58 },
  { customers: 200, geometry: 'mixed', isLongDay: true, seed: 3, best: 23340.94 },
  { customers: 400, geometry: 'random', isLongDay: false, seed: 3, best: 75254.23 },
  { customers: 400, geometry: 'mixed', isLongDay: true, seed: 3, best: 50171.84 },
  { customers: 1000, geometry: 'random', isLongDay: false, seed: 3, best: 238279.51 },
  { customers: 1000, geometry: 'mixed', isLongDay: true, seed: 3, best: 141801.47 },
];
