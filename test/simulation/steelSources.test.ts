import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { casingPoles, pipelineSources } from '../../src/simulation/steelSources.js';

const STEEL = { joint_spread: 0.25, reversed_share: 0.1 };
const CASING = { id: 'a', at: [10, 20] as const, top_depth_m: 1.5, pole_am: 200, length_m: 150, tilt_deg: 2, tilt_azimuth_deg: 90 };

describe('casingPoles', () => {
  it('has an attracting top, collars 16 to 48 ft apart and no net pole', () => {
    for (let seed = 0; seed < 50; seed++) {
      const poles = casingPoles(CASING, STEEL, new Random(seed));
      expect(poles[0]).toEqual([10, 20, -1.5, -200]);
      expect(poles.reduce((sum, pole) => sum + pole[3], 0)).toBeCloseTo(0, 9);
      const along = poles.map((pole) => (-1.5 - pole[2]) / Math.cos(2 * Math.PI / 180));
      for (let i = 1; i + 1 < along.length; i++) {
        expect(along[i]! - along[i - 1]!).toBeGreaterThanOrEqual(16 * 0.3048);
        expect(along[i]! - along[i - 1]!).toBeLessThanOrEqual(48 * 0.3048);
      }
      expect(along.at(-1)).toBeCloseTo(150, 9);
    }
  });

  it('leans the way it is told', () => {
    const [x, y] = casingPoles(CASING, STEEL, new Random(1)).at(-1)!;
    expect(x).toBeCloseTo(10 + 150 * Math.sin(2 * Math.PI / 180), 9);
    expect(y).toBeCloseTo(20, 9);
  });

  it('repels where its pole strength is negative', () => {
    expect(casingPoles({ ...CASING, pole_am: -200 }, STEEL, new Random(1))[0]![3]).toBe(200);
  });
});

describe('pipelineSources', () => {
  const pipe = { id: 'p', points: [[0, 0], [60, 0], [60, 40]] as const, depth_m: 1.2, joint_m: 12, pole_sd_am: 8, induced_am2_m: 1.5 };

  it('has no net pole, and the induced moment of its length along the main field', () => {
    const { poles, dipoles } = pipelineSources(pipe, [0, 0.6, -0.8], new Random(3));
    expect(poles.reduce((sum, pole) => sum + pole[3], 0)).toBeCloseTo(0, 9);
    expect(poles.length).toBeGreaterThan(6);
    const moment = [3, 4, 5].map((k) => dipoles.reduce((sum, dipole) => sum + dipole[k]!, 0));
    expect(moment[0]).toBeCloseTo(0, 9);
    expect(moment[1]).toBeCloseTo(150 * 0.6, 6);
    expect(moment[2]).toBeCloseTo(-150 * 0.8, 6);
  });
});
