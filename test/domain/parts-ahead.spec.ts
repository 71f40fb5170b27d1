import fc from 'fast-check';
import { MOST_LACK_CHANCE, shelfAhead, vanPartsAhead } from '@shared/domain/parts/parts-ahead';
import { chanceOfMore, successCounts } from '@shared/domain/parts/poisson-binomial';
import { causesOfVisit, partChances } from '@shared/domain/phone-check/part-chances';

const chances = fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { maxLength: 10 });

describe('successCounts', () => {
  it('is the binomial distribution when all chances are alike', () => {
    // n = 10, p = 0.3: 0.2668 for 3, as in any table of the binomial distribution.
    const counts = successCounts(new Array<number>(10).fill(0.3));
    expect(counts[3]).toBeCloseTo(0.2668, 4);
    expect(chanceOfMore(counts, 5)).toBeCloseTo(0.0473, 4);
  });

  it('agrees with counting every outcome', () => {
    fc.assert(
      fc.property(chances, (each) => {
        const counted = new Float64Array(each.length + 1);
        for (let outcome = 0; outcome < 1 << each.length; outcome++) {
          let chance = 1;
          let successes = 0;
          each.forEach((one, i) => {
            const isSuccess = ((outcome >> i) & 1) === 1;
            chance *= isSuccess ? one : 1 - one;
            if (isSuccess) successes++;
          });
          counted[successes]! += chance;
        }
        successCounts(each).forEach((one, n) => expect(one).toBeCloseTo(counted[n]!, 10));
      }),
      { numRuns: 40 },
    );
  });
});

describe('partChances', () => {
  const unit = { kind: 'fridge-freezer', compressorStart: 'relay' } as const;

  it('asks one part or none of a visit', () => {
    const all = partChances(causesOfVisit({}, unit));
    const sum = all.reduce((total, [, chance]) => total + chance, 0);
    expect(sum).toBeGreaterThan(0.5);
    expect(sum).toBeLessThan(1);
  });

  it('weighs a likely cause three times a possible one', () => {
    const cause = (id: 'thermostat' | 'defrost', likelihood: 'likely' | 'possible') =>
      ({ cause: id, likelihood, why: '', source: '' }) as const;
    // 6 of 6 + 2 + 2 for what nobody asked about.
    expect(partChances([cause('thermostat', 'likely'), cause('defrost', 'possible')])).toEqual([
      ['thermostat', 0.6],
      ['defrost-heater', 0.2],
    ]);
  });
});

describe('vanPartsAhead', () => {
  it('tells how likely a van lacks a part, and what mends it', () => {
    // Two stops of one half each: both need it with 1/4, one with 1/2.
    const stop = [['start-relay', 0.5]] as const;
    const [part] = vanPartsAhead({
      technicianId: 'a',
      stock: { 'start-relay': 1 },
      stops: [stop, stop],
    }).parts;
    expect(part).toEqual({ part: 'start-relay', onVan: 1, expected: 1, lackChance: 0.25, load: 1 });
  });

  it('loads no more than it must, and enough', () => {
    fc.assert(
      fc.property(chances, fc.nat(6), (each, onVan) => {
        const { parts } = vanPartsAhead({
          technicianId: 'a',
          stock: { overload: onVan },
          stops: each.map((chance) => [['overload', chance]]),
        });
        const counts = successCounts(each);
        for (const { load } of parts) {
          expect(chanceOfMore(counts, onVan + load)).toBeLessThanOrEqual(MOST_LACK_CHANCE);
          if (load > 0)
            expect(chanceOfMore(counts, onVan + load - 1)).toBeGreaterThan(MOST_LACK_CHANCE);
        }
      }),
    );
  });

  it('sums the vans up, beside what no route has yet', () => {
    const van = (technicianId: string) => ({
      technicianId,
      stock: { thermostat: 1 },
      stops: [[['thermostat', 0.5] as const], [['thermostat', 0.5] as const]],
    });
    expect(shelfAhead([van('a'), van('b')], [[['power-cord', 0.4]]])).toEqual([
      { part: 'thermostat', onRoutes: 2, waiting: 0, onVans: 2, load: 2 },
      { part: 'power-cord', onRoutes: 0, waiting: 0.4, onVans: 0, load: 0 },
    ]);
  });
});
