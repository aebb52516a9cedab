import { describe, expect, it } from 'vitest';
import { detectionGrid } from '../../src/detection/detectionGrid.js';
import { detectionChance, makeDetector, type DetectorOptions } from '../../src/detection/detector.js';
import { gather } from '../../src/detection/gather.js';
import type { Heard } from '../../src/detection/heard.js';
import { heardAlongLines, type LineToWalk } from '../../src/detection/heardAlongLines.js';
import { PLANNING_NOISE } from '../../src/detection/noise.js';
import { readingTree } from '../../src/detection/readingTree.js';
import type { Area } from '../../src/density/types.js';
import { fieldDirection } from '../../src/field/mainField.js';
import { choleskySolve, cholesky } from '../../src/numerics/cholesky.js';

const unit = fieldDirection(66, -9);
const options: DetectorOptions = {
  target: { poleAM: [4, 40], depthM: [0.5, 2.5], basis: 'made' }, noise: PLANNING_NOISE, mainField: { unit }, falseAlarmsPerHa: 0.1, leastDeflection: 0,
};
const lines = (spacingM: number, lengthM = 60): LineToWalk[] =>
  Array.from({ length: Math.floor(lengthM / spacingM) + 1 }, (_, i) =>
    i % 2 ? { x0: i * spacingM, y0: lengthM, x1: i * spacingM, y1: 0 } : { x0: i * spacingM, y0: 0, x1: i * spacingM, y1: lengthM });
const map = (heard: Heard, f: (i: number) => number): Heard => {
  const order = Array.from(heard.x, (_, i) => f(i));
  const pick = (a: Float64Array): Float64Array => Float64Array.from(order, (i) => a[i]!);
  return { x: pick(heard.x), y: pick(heard.y), heightM: pick(heard.heightM), timeS: pick(heard.timeS),
    line: Int32Array.from(order, (i) => heard.line[i]!), usable: Uint8Array.from(order, (i) => heard.usable[i]!) };
};
const shifted = (heard: Heard, { east = 0, north = 0, up = 0, later = 0 }): Heard => ({
  ...heard, x: heard.x.map((v) => v + east), y: heard.y.map((v) => v + north), heightM: heard.heightM.map((v) => v + up), timeS: heard.timeS.map((v) => v + later),
});
const square: Area = [[[[0, 0], [60, 0], [60, 60], [0, 60], [0, 0]]]];

describe('readings pooled in a tree', () => {
  const heard = heardAlongLines(lines(4), { stepM: 0.3 });
  const tree = readingTree(heard, { leafM: 0.5, rootM: 8 });

  it('each level holds every reading once', () => {
    for (let level = 0; level <= tree.levels; level++) {
      let [count, x] = [0, 0];
      tree.level.forEach((at, node) => {
        if (at !== level) return;
        count += tree.weight[node]!;
        x += tree.weight[node]! * tree.x[node]!;
      });
      expect(count).toBe(heard.x.length);
      expect(x).toBeCloseTo(heard.x.reduce((a, b) => a + b, 0), 6);
    }
  });

  it('a window that holds everything gathers every reading once; a small room gets coarser pools', () => {
    for (const room of [2000, 300]) {
      const into = { nodes: new Int32Array(room), count: 0 };
      gather(tree, [31, 17], { windowM: 100, depthM: 1, poolShare: 0.3, into });
      let weight = 0;
      for (let k = 0; k < into.count; k++) weight += tree.weight[into.nodes[k]!]!;
      expect(weight).toBe(heard.x.length);
    }
    const into = { nodes: new Int32Array(10), count: 0 };
    gather(tree, [31, 17], { windowM: 100, depthM: 1, poolShare: 0.3, into });
    expect(into.count).toBeGreaterThan(0);
    expect(into.count).toBeLessThanOrEqual(10);
  });

  it('leaves out what is not good', () => {
    const broken: Heard = { ...heard, usable: heard.usable.map((_, i) => (i % 3 ? 1 : 0)), x: heard.x.map((v, i) => (i === 4 ? NaN : v)) };
    const kept = readingTree(broken, { leafM: 0.5, rootM: 8 });
    let count = 0;
    kept.level.forEach((level, node) => { if (level === 0) count += kept.weight[node]!; });
    expect(count).toBe(broken.usable.filter((good, i) => good && i !== 4).length);
    expect(readingTree({ ...heard, usable: heard.usable.map(() => 0) }, { leafM: 0.5, rootM: 8 }).roots).toHaveLength(0);
  });
});

/** The same question put to every single reading in the window, with a dense covariance and explicit normal equations. */
function plain(heard: Heard, [x, y]: readonly [number, number], { poleAM, depthM }: { poleAM: number; depthM: number }): { deflection: number; wander: number } {
  const { noise, target } = options;
  const windowM = 4 * (heard.heightM[0]! + target.depthM[1]);
  const near = Array.from(heard.x, (_, i) => i).filter((i) => Math.hypot(heard.x[i]! - x, heard.y[i]! - y) <= windowM);
  const n = near.length;
  const model = (i: number, east = 0, north = 0): number => {
    const r = [heard.x[i]! + east - x, heard.y[i]! + north - y, heard.heightM[i]! + depthM] as const;
    return (100 * poleAM * (unit[0] * r[0] + unit[1] * r[1] + unit[2] * r[2])) / Math.hypot(...r) ** 3;
  };
  const c = new Float64Array(n * n);
  near.forEach((i, a) => near.forEach((j, b) => {
    c[a * n + b] = (a === b ? noise.whiteSdNT ** 2 : 0)
      + noise.correlatedSdNT ** 2 * Math.exp(-Math.hypot(heard.x[i]! - heard.x[j]!, heard.y[i]! - heard.y[j]!) / noise.correlationM);
  }));
  cholesky(c, n);
  const columns = [near.map((i) => model(i)), near.map(() => 1), near.map((i) => heard.x[i]! - x), near.map((i) => heard.y[i]! - y)];
  const solved = columns.map((column) => choleskySolve(c, n, column));
  const gram = columns.map((p) => solved.map((q) => p.reduce((sum, v, k) => sum + v * q[k]!, 0)));
  const b = Float64Array.from([1, 2, 3].flatMap((p) => [1, 2, 3].map((q) => gram[p]![q]!)));
  cholesky(b, 3);
  const cross = [1, 2, 3].map((p) => gram[0]![p]!);
  const back = choleskySolve(b, 3, cross);
  const d2 = gram[0]![0]! - cross.reduce((sum, v, k) => sum + v * back[k]!, 0);
  // Filter w = C⁻¹(s − background); its output is d², and position error moves it by w·(slope × error).
  const w = near.map((_, k) => solved[0]![k]! - back.reduce((sum, v, p) => sum + v * solved[p + 1]![k]!, 0));
  const e = 1e-4;
  let variance = 0;
  for (const [east, north] of [[e, 0], [0, e]] as const) {
    const g = near.map((i, k) => (w[k]! * (model(i, east, north) - model(i, -east, -north))) / (2 * e));
    near.forEach((i, a) => near.forEach((j, q) => { variance += g[a]! * g[q]! * Math.exp(-Math.abs(heard.timeS[i]! - heard.timeS[j]!) / noise.positionCorrelationS); }));
  }
  return { deflection: Math.sqrt(d2), wander: (noise.positionSdM * Math.sqrt(variance)) / d2 };
}

describe('deflection at a place', () => {
  it('pooling costs little against every reading by itself', () => {
    const heard = heardAlongLines(lines(8, 32), { stepM: 0.4 });
    const detector = makeDetector(heard, options);
    for (const place of [[16, 16], [12, 15], [13.7, 20.2], [20.5, 9]] as const) {
      for (const source of [{ poleAM: 5, depthM: 0.5 }, { poleAM: 5, depthM: 2.5 }, { poleAM: 300, depthM: 1 }]) {
        const [pooled, single] = [detector.hear(place[0], place[1], source), plain(heard, place, source)];
        // Errs low.
        expect(pooled.deflection / single.deflection).toBeGreaterThan(0.88);
        expect(pooled.deflection / single.deflection).toBeLessThan(1.02);
        expect(Math.abs(pooled.wander - single.wander)).toBeLessThan(0.02);
      }
    }
  });

  it('grows with the pole, whatever its sign', () => {
    const detector = makeDetector(heardAlongLines(lines(8), { stepM: 0.25 }), options);
    const of = (poleAM: number): number => detector.hear(28, 30, { poleAM, depthM: 1.5 }).deflection;
    expect(of(30) / of(3)).toBeCloseTo(10, 9);
    expect(of(-30)).toBe(of(30));
  });

  it('a strong casing is heard well in spite of position error', () => {
    const heard = heardAlongLines(lines(8), { stepM: 0.25 });
    const strong: DetectorOptions = { ...options, target: { poleAM: [60, 400], depthM: [0, 2.5], basis: 'made' } };
    for (const positionSdM of [0, 0.3, 1, 2]) {
      expect(detectionChance(heard, [28, 30], { ...strong, noise: { ...PLANNING_NOISE, positionSdM } })).toBeGreaterThan(0.995);
    }
  });
});

describe('chance at a place', () => {
  const heard = heardAlongLines(lines(8), { stepM: 0.25 });
  const place = [28, 30] as const;
  const weak: DetectorOptions = { ...options, target: { poleAM: [1, 8], depthM: [0.5, 2.5], basis: 'made' } };
  const usual = detectionChance(heard, place, weak);

  it('falls with noise, geology, position error, height, wider lines, and a stricter threshold', () => {
    const noisier = (noise: Partial<typeof PLANNING_NOISE>): number => detectionChance(heard, place, { ...weak, noise: { ...PLANNING_NOISE, ...noise } });
    expect(usual).toBeGreaterThan(0.3);
    expect(usual).toBeLessThan(0.95);
    expect(noisier({ whiteSdNT: 3 })).toBeLessThan(usual);
    expect(noisier({ correlatedSdNT: 6 })).toBeLessThan(usual - 0.1);
    expect(noisier({ positionSdM: 2 })).toBeLessThan(usual);
    expect(detectionChance(shifted(heard, { up: 2 }), place, weak)).toBeLessThan(usual - 0.1);
    expect(detectionChance(heardAlongLines(lines(16), { stepM: 0.25 }), [24, 30], weak)).toBeLessThan(usual - 0.1);
    expect(detectionChance(heard, place, { ...weak, falseAlarmsPerHa: 0.001 })).toBeLessThan(usual);
    expect(detectionChance(heard, place, { ...weak, target: { ...weak.target, poleAM: [2, 16] } })).toBeGreaterThan(usual);
  });

  it('falls where a place is noisier than the model, and where more is asked of a source', () => {
    const of = (more: Partial<DetectorOptions>): number => detectionChance(heard, place, { ...weak, ...more });
    expect(of({ noiseScale: () => 1 })).toBe(usual);
    expect(of({ noiseScale: (x) => (x > 20 ? 2 : 1) })).toBeLessThan(usual - 0.1);
    expect(of({ noiseScale: (x) => (x > 40 ? 2 : 1) })).toBe(usual);
    const { leastDeflection: _, ...unsaid } = weak;
    expect(detectionChance(heard, place, unsaid)).toBeLessThan(usual);
    expect(makeDetector(heard, unsaid).threshold).toBe(6);
    expect(of({ leastDeflection: 2 })).toBe(usual);
  });

  it('does not depend on where the frame begins, on the clock, on the order of readings or on the sign of the field', () => {
    const far = shifted(heard, { east: 4_500_000, north: -2_000_000, later: 1.77e9 });
    expect(detectionChance(far, [place[0] + 4_500_000, place[1] - 2_000_000], weak)).toBeCloseTo(usual, 3);
    const n = heard.x.length;
    expect(detectionChance(map(heard, (i) => (i * 7919) % n), place, weak)).toBeCloseTo(usual, 9);
    expect(detectionChance(heard, place, { ...weak, mainField: { unit: unit.map((u) => -u) as [number, number, number] } })).toBeCloseTo(usual, 12);
  });

  it('is 0 where nobody listened, and where a handful of readings leave nothing beside the background', () => {
    expect(detectionChance(heard, [300, 300], weak)).toBe(0);
    const few = heardAlongLines([{ x0: 0, y0: 0, x1: 0, y1: 0.4 }], { stepM: 0.2 });
    expect(detectionChance(few, [0, 0], weak)).toBe(0);
    expect(detectionChance({ ...heard, usable: heard.usable.map(() => 0) }, place, weak)).toBe(0);
  });

  it('copes with readings without a time and with noise that is all zero', () => {
    const untimed: Heard = { ...heard, timeS: heard.timeS.map(() => NaN) };
    expect(Math.abs(detectionChance(untimed, place, weak) - usual)).toBeLessThan(0.05);
    const silent = { whiteSdNT: 0, correlatedSdNT: 0, correlationM: 0, positionSdM: 0, positionCorrelationS: 0 };
    expect(detectionChance(heard, place, { ...weak, noise: silent })).toBeGreaterThan(0.999);
  });
});

describe('detection grid', () => {
  const open: Area = [[[[0, 0], [60, 0], [60, 60], [0, 60], [0, 0]], [[20, 20], [30, 20], [30, 30], [20, 30], [20, 20]]]];
  const weak = { target: { poleAM: [1, 8], depthM: [0.5, 2.5], basis: 'made' } as const, noise: PLANNING_NOISE, mainField: { unit }, leastDeflection: 0 };
  const western = heardAlongLines(lines(8).slice(0, 4), { stepM: 0.25 });

  it('is NaN outside open ground, 0 where not searched, else a chance no larger than covered', () => {
    const { chance, covered, reachM } = detectionGrid(western, open, weak);
    expect(chance.width * chance.cellM).toBe(60);
    const at = (grid: typeof chance, x: number, y: number): number => grid.values[Math.floor((grid.north - y) / grid.cellM) * grid.width + Math.floor((x - grid.west) / grid.cellM)]!;
    expect(at(chance, 25, 25)).toBeNaN();
    expect(at(covered, 25, 25)).toBeNaN();
    expect(at(covered, 12, 40)).toBe(1);
    expect(at(chance, 12, 40)).toBeGreaterThan(0.2);
    expect(reachM).toBeCloseTo(1.91 * 3, 1);
    expect(at(covered, 55, 40)).toBe(0);
    expect(at(chance, 55, 40)).toBe(0);
    chance.values.forEach((value, i) => {
      expect(Number.isNaN(value)).toBe(Number.isNaN(covered.values[i]!));
      if (value === value) {
        expect(value).toBeLessThanOrEqual(covered.values[i]!);
        expect(value).toBeGreaterThanOrEqual(0);
      }
    });
  });

  it('counts a cell as searched exactly where a reading lies within reach of its middle', () => {
    const { covered } = detectionGrid(western, open, { ...weak, reachM: 3, cellM: 1.7 });
    covered.values.forEach((value, i) => {
      if (value !== value) return;
      const x = covered.west + ((i % covered.width) + 0.5) * 1.7;
      const y = covered.north - (Math.floor(i / covered.width) + 0.5) * 1.7;
      let nearest = Infinity;
      western.x.forEach((sx, k) => { nearest = Math.min(nearest, Math.hypot(sx - x, western.y[k]! - y)); });
      expect(value).toBe(nearest <= 3 ? 1 : 0);
    });
  });

  it('fine cells that are interpolated stay close to the chance at their own place', () => {
    const heard = heardAlongLines(lines(8).filter((_, i) => i !== 3), { stepM: 0.25 });
    const detector = makeDetector(heard, { ...weak, falseAlarmsPerHa: 0.1 });
    const { chance } = detectionGrid(heard, open, { ...weak, cellM: 0.5 });
    let worst = 0;
    for (let i = 0; i < chance.values.length; i += 211) {
      const value = chance.values[i]!;
      if (!(value > 0)) continue;
      const exact = detector.chanceAt(chance.west + ((i % chance.width) + 0.5) * 0.5, chance.north - (Math.floor(i / chance.width) + 0.5) * 0.5);
      worst = Math.max(worst, Math.abs(exact - value));
    }
    expect(worst).toBeLessThan(0.03);
  });

  it('is 0 all over when nothing was heard, and NaN only where there is no open ground', () => {
    const { chance, covered } = detectionGrid({ ...western, usable: western.usable.map(() => 0) }, square, weak);
    expect(chance.values.every((v) => v === 0)).toBe(true);
    expect(covered.values.every((v) => v === 0)).toBe(true);
  });
});

describe('heardAlongLines', () => {
  it('walks the lines in order and takes time to cross between them', () => {
    const heard = heardAlongLines([{ x0: 0, y0: 0, x1: 0, y1: 10 }, { x0: 5, y0: 10, x1: 5, y1: 0 }], { stepM: 1, heightM: 2, speedMS: 0.5 });
    expect(heard.x).toHaveLength(22);
    expect(Array.from(heard.timeS.slice(9, 13))).toEqual([18, 20, 30, 32]);
    expect(heard.y[11]).toBe(10);
    expect(heard.heightM[3]).toBe(2);
    expect(Array.from(heard.line).filter((l) => l === 1)).toHaveLength(11);
    expect(() => heardAlongLines([], { stepM: 0 })).toThrow();
  });
});

