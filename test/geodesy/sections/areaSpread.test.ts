import { describe, expect, it } from 'vitest';
import { aliquotPolygon } from '../../../src/geodesy/sections/aliquotPolygon.js';
import { areaSpread } from '../../../src/geodesy/sections/areaSpread.js';
import type { AliquotStep } from '../../../src/geodesy/sections/types.js';
import { Random } from '../../../src/numerics/random.js';
import { FT, madeSection, SQUARE, type Feet } from './madeSection.js';

const EIGHT: readonly Feet[] = [[-2640, -2640], [0, -2650], [2640, -2640], [2655, 0], [2640, 2640], [10, 2640], [-2640, 2640], [-2630, -5]];

/** Mean square of how far places along a part's edge move on each axis when every vertex does by about a metre. */
function moved(feet: readonly Feet[], steps: readonly AliquotStep[]): [number, number] {
  const random = new Random(4);
  const rest = aliquotPolygon(madeSection(feet), { steps });
  const rounds = 400;
  let [east, north, count] = [0, 0, 0];
  for (let round = 0; round < rounds; round++) {
    const shifted = feet.map(([e, n]): Feet => [e + random.normal() / FT, n + random.normal() / FT]);
    const now = aliquotPolygon(madeSection(shifted), { steps });
    for (let i = 1; i < rest.length; i++) {
      const piece = Math.round(Math.hypot(rest[i]![0] - rest[i - 1]![0], rest[i]![1] - rest[i - 1]![1]));
      for (const t of [0.1, 0.3, 0.5, 0.7, 0.9]) {
        const d = ([0, 1] as const).map((k) => (1 - t) * (now[i - 1]![k] - rest[i - 1]![k]) + t * (now[i]![k] - rest[i]![k])) as [number, number];
        east += piece * d[0] ** 2;
        north += piece * d[1] ** 2;
        count += piece;
      }
    }
  }
  return [east / count, north / count];
}

describe('areaSpread', () => {
  it('of a section is two thirds of the variance of its corners', () => {
    for (const feet of [SQUARE, EIGHT]) {
      const [ee, en, nn] = areaSpread(madeSection(feet), { steps: [] });
      expect(ee).toBeCloseTo(2 / 3, 3);
      expect(en).toBeCloseTo(0, 3);
      expect(nn).toBeCloseTo(2 / 3, 3);
    }
  });

  it.each([[['SW']], [['SW', 'NE']], [['N2']], [['NE', 'SE', 'SE']]] as ReadonlyArray<[AliquotStep[]]>)('of %s is how far its edge moves with the corners', (steps) => {
    for (const feet of [SQUARE, EIGHT]) {
      const [ee, , nn] = areaSpread(madeSection(feet), { steps });
      const [east, north] = moved(feet, steps);
      // 400 rounds of some eight free numbers: about 4 % on a mean square.
      expect(ee / east).toBeGreaterThan(0.85);
      expect(ee / east).toBeLessThan(1.15);
      expect(nn / north).toBeGreaterThan(0.85);
      expect(nn / north).toBeLessThan(1.15);
    }
  });
});
