import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { Random } from '../../../src/numerics/random.js';
import { liesInRing } from '../../../src/geodesy/sections/liesInRing.js';
import { placeFromCalls } from '../../../src/geodesy/sections/placeFromCalls.js';
import type { AliquotStep, FootageCalls, Section, Side } from '../../../src/geodesy/sections/types.js';
import { calls, feetOf, madeSection, SQUARE, type Feet } from './madeSection.js';

/** Feet: the plane keeps a mile to 0.0003 ft. */
const NEAR_FT = 0.001;

function expectFeet(section: Section, called: FootageCalls, want: Feet, steps: readonly AliquotStep[] = []): void {
  const { x, y } = placeFromCalls(section, called, { steps });
  const [east, north] = feetOf(x, y);
  expect(Math.hypot(east - want[0], north - want[1])).toBeLessThan(NEAR_FT);
}

function code(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.code;
    throw error;
  }
  return 'none';
}

describe('placeFromCalls on a square mile, by hand', () => {
  const section = madeSection(SQUARE);

  it('measures from the lines of the section', () => {
    expectFeet(section, calls([660, 'N'], [1980, 'E']), [2640 - 1980, 2640 - 660]);
    expectFeet(section, calls([1980, 'E'], [660, 'N']), [2640 - 1980, 2640 - 660]);
    expectFeet(section, calls([330, 'S'], [990, 'W']), [-2640 + 990, -2640 + 330]);
    expectFeet(section, calls([0, 'S'], [0, 'W']), [-2640, -2640]);
    expectFeet(section, calls([5280, 'S'], [2640, 'W']), [0, 2640]);
  });

  it('measures from the lines of the part named', () => {
    expectFeet(section, calls([330, 'S'], [990, 'W']), [990, 330], ['NE']);
    // The north-east quarter of the south-west quarter reaches from −1,320 to 0 both ways.
    expectFeet(section, calls([330, 'S'], [200, 'W']), [-1320 + 200, -1320 + 330], ['SW', 'NE']);
    expectFeet(section, calls([100, 'N'], [100, 'E']), [2640 - 100, 1320 - 100], ['NE', 'S2']);
    expectFeet(section, calls([10, 'N'], [10, 'W']), [-2640 + 10, -2640 + 330 - 10], ['SW', 'SW', 'SW', 'SW']);
  });

  it('is the same for all four pairs of calls', () => {
    for (const [ns, n] of [['N', 700], ['S', 4580]] as const) {
      for (const [ew, e] of [['E', 1234], ['W', 4046]] as const) expectFeet(section, calls([n, ns], [e, ew]), [2640 - 1234, 2640 - 700]);
    }
  });

  it('refuses what leads out of it', () => {
    expect(code(() => placeFromCalls(section, calls([5281, 'N'], [660, 'E'])))).toBe('position_invalid');
    expect(code(() => placeFromCalls(section, calls([1330, 'N'], [660, 'E']), { steps: ['NE', 'NE'] }))).toBe('position_invalid');
    expect(code(() => placeFromCalls(section, calls([1e9, 'N'], [660, 'E'])))).toBe('position_invalid');
  });

  it('refuses calls that fix no place', () => {
    expect(code(() => placeFromCalls(section, calls([660, 'N'], [660, 'S'])))).toBe('position_invalid');
    expect(code(() => placeFromCalls(section, calls([660, 'W'], [660, 'E'])))).toBe('position_invalid');
    for (const bad of [-1, NaN, Infinity]) expect(code(() => placeFromCalls(section, calls([bad, 'N'], [660, 'E'])))).toBe('position_invalid');
  });

  it('says where, how far and how far it may be', () => {
    expect(() => placeFromCalls(section, calls([5400, 'N'], [660, 'E']), undefined, { where: 'permits.csv, row 7' }))
      .toThrow('permits.csv, row 7: found 5,400 ft from the north line of section 1, wanted at most 5,280 ft');
  });
});

describe('placeFromCalls on lines that bend', () => {
  it('is perpendicular to the piece of the line that lies nearest', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2640], [0, 2660], [-2640, 2640]]);
    const k = 20 / 2640;
    for (const [d, e] of [[660, 1320], [2000, 400]] as const) {
      const east = 2640 - e;
      expectFeet(section, calls([d, 'N'], [e, 'E']), [east, 2660 - k * east - d * Math.sqrt(1 + k * k)]);
    }
  });

  it('is from the bend where the line is bent inwards and no perpendicular meets it', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2640], [0, 2600], [-2640, 2640]]);
    expectFeet(section, calls([1000, 'N'], [2640, 'E']), [0, 1600]);
    // 1,000 ft below the bend the perpendiculars of both pieces leave a gap of 15 ft to each side.
    expectFeet(section, calls([1000, 'N'], [2650, 'E']), [-10, 2600 - Math.sqrt(1000 ** 2 - 10 ** 2)]);
  });

  it('comes through an offset of a chain in the line', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2640], [0, 2640], [0, 2574], [-2640, 2574]]);
    expect(section.irregular).toEqual([]);
    expectFeet(section, calls([660, 'N'], [1000, 'E']), [1640, 1980]);
    expectFeet(section, calls([660, 'N'], [1000, 'W']), [-1640, 2574 - 660]);
    // Just beyond the offset its lower end is nearest.
    expectFeet(section, calls([660, 'N'], [2620, 'E']), [20, 2574 - Math.sqrt(660 ** 2 - 20 ** 2)]);
  });

  it('produces the line beyond its corner where the section leans', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [3140, 2640], [-2140, 2640]]);
    const slope = 500 / 5280;
    // From the west line 400 ft, 100 ft above the south line, whose foot on the west line lies below the corner.
    const east = -2640 + slope * 100 + 400 * Math.sqrt(1 + slope * slope);
    expectFeet(section, calls([100, 'S'], [400, 'W']), [east, -2540]);
    const low = -2640 + slope * 10 + 400 * Math.sqrt(1 + slope * slope);
    expectFeet(section, calls([10, 'S'], [400, 'W']), [low, -2630]);
  });
});

describe('placeFromCalls turns with its section', () => {
  const shapes: Readonly<Record<string, readonly Feet[]>> = {
    square: SQUARE,
    leaning: [[-2640, -2640], [2600, -2700], [2690, 2580], [-2550, 2700]],
    'with quarter corners': [[-2640, -2640], [10, -2650], [2600, -2700], [2650, -100], [2690, 2580], [40, 2660], [-2550, 2700], [-2600, 50]],
    'half as high as wide': [[-2640, -1320], [2640, -1300], [2640, 1320], [-2640, 1300]],
  };
  for (const [name, shape] of Object.entries(shapes)) {
    it(name, () => {
      const upright = placeFromCalls(madeSection(shape), calls([600, 'N'], [1800, 'W']), { steps: ['N2'] });
      const [e0, n0] = feetOf(upright.x, upright.y);
      for (const degrees of [-35, -10, 0.5, 20, 35]) {
        const [c, s] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
        const turned = madeSection(shape.map(([e, n]): Feet => [c * e - s * n, s * e + c * n]));
        expectFeet(turned, calls([600, 'N'], [1800, 'W']), [c * e0 - s * n0, s * e0 + c * n0], ['N2']);
      }
    });
  }
});

describe('placeFromCalls never leads out of the section', () => {
  it('for made sections and calls of all sorts', () => {
    const random = new Random(20_240);
    const sides: readonly Side[] = ['N', 'S', 'E', 'W'];
    const steps: readonly AliquotStep[] = ['NE', 'NW', 'SE', 'SW', 'N2', 'S2', 'E2', 'W2'];
    let [placed, refused] = [0, 0];
    for (let trial = 0; trial < 400; trial++) {
      const jitter = (): number => (random.uniform() - 0.5) * 2 * [5, 100, 900][random.integer(3)]!;
      const shape: Feet[] = [];
      for (const [i, corner] of SQUARE.entries()) {
        const next = SQUARE[(i + 1) % 4]!;
        shape.push([corner[0] + jitter(), corner[1] + jitter()]);
        // Now and then a corner drawn twice.
        if (random.integer(6) === 0) shape.push([shape.at(-1)![0] + random.normal() * 4, shape.at(-1)![1] + random.normal() * 4]);
        for (let k = random.integer(4), n = 0; n < k; n++) {
          const t = (n + 1) / (k + 1);
          shape.push([corner[0] + t * (next[0] - corner[0]) + jitter() / 10, corner[1] + t * (next[1] - corner[1]) + jitter() / 10]);
        }
      }
      let section: Section;
      try {
        section = madeSection(shape);
      } catch (error) {
        expect(error).toBeInstanceOf(UserError);
        refused++;
        continue;
      }
      for (let k = 0; k < 25; k++) {
        const called = calls([random.uniform() * 6000, sides[random.integer(4)]!], [random.uniform() * 6000, sides[random.integer(4)]!]);
        const part = { steps: Array.from({ length: random.integer(4) }, () => steps[random.integer(8)]!) };
        try {
          const { x, y, cov } = placeFromCalls(section, called, part);
          expect(liesInRing(section.vertices, section.plane.toPlane(x, y), 0.001)).toBe(true);
          expect(cov[0] > 0 && cov[2] > 0 && cov[0] * cov[2] > cov[1] ** 2).toBe(true);
          placed++;
        } catch (error) {
          expect(error).toBeInstanceOf(UserError);
          refused++;
        }
      }
    }
    expect(placed).toBeGreaterThan(500);
    expect(refused).toBeGreaterThan(500);
  });
});
