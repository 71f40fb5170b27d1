import { longSearch, type SolomonFigures } from '../support/long-searches';
import { SHORTEST_FOUND, solomonNames } from '../support/solomon';

describe('plan, on published routing instances', () => {
  const names = solomonNames();
  if (names.length === 0) {
    it.skip('needs THAWLINE_TEST_DATA with a folder vrptw', () => undefined);
    return;
  }
  let figures: readonly SolomonFigures[] = [];
  beforeAll(async () => {
    figures = await longSearch({ kind: 'solomon', names, iterations: 4000 });
  });

  it.each(names)('serves everybody in time in %s, within 5 % of the shortest way found', (name) => {
    const { violations, unassigned, lateness, travel } = figures.find((one) => one.name === name)!;
    expect(violations).toEqual([]);
    expect(unassigned).toBe(0);
    expect(lateness).toBe(0);
    const known = SHORTEST_FOUND[name];
    if (known !== undefined) expect(travel / 10 / known).toBeLessThan(1.05);
  });
});
