import { describe, expect, it } from 'vitest';
import { addDipole } from '../../src/field/dipole.js';
import { HALF_WIDTH_FACTORS, depthFromHalfWidth } from '../../src/field/halfWidth.js';
import { addHorizontalLine, type HorizontalLine } from '../../src/field/horizontalLine.js';
import { inducedSphereMoment } from '../../src/field/inducedSphere.js';
import { addPole, addVerticalPipe } from '../../src/field/pole.js';
import { projectedAnomaly, totalFieldAnomaly } from '../../src/field/totalField.js';
import { fieldDirection } from '../../src/field/mainField.js';

const field = (add: (b: number[]) => void): number[] => { const b = [0, 0, 0]; add(b); return b; };
const expectClose = (a: readonly number[], b: readonly number[], tolerance: number): void =>
  a.forEach((value, i) => expect(Math.abs(value - b[i]!)).toBeLessThan(tolerance));

describe('published numbers', () => {
  it('puts half of the vertical field at the half-width (Breiner 1973; Telford et al. 1990: 1.305, 2, 2.06)', () => {
    const vertical = {
      pole: (x: number) => field((b) => addPole(b, -1, x, 0, 1))[2]!,
      dipole: (x: number) => field((b) => addDipole(b, 0, 0, -1, x, 0, 1))[2]!,
      line: (x: number) => field((b) => addHorizontalLine(b, { azimuthDeg: 0, halfLengthM: Infinity, momentPerM: [0, 0, -1] }, [x, 0, 1]))[2]!,
    };
    for (const kind of ['pole', 'dipole', 'line'] as const) {
      let [low, high] = [0, 1];
      for (let i = 0; i < 60; i++) {
        const x = (low + high) / 2;
        if (vertical[kind](x) / vertical[kind](0) > 0.5) low = x; else high = x;
      }
      expect(1 / low).toBeCloseTo(HALF_WIDTH_FACTORS[kind], 9);
    }
    expect(HALF_WIDTH_FACTORS.pole).toBeCloseTo(1.3048, 4);
    expect(HALF_WIDTH_FACTORS.dipole).toBeCloseTo(1.9973, 4);
    expect(HALF_WIDTH_FACTORS.line).toBeCloseTo(2.0582, 4);
    expect(depthFromHalfWidth('pole', 2)).toBeCloseTo(2.6096, 3);
  });

  it('gives a ton of steel as a solid sphere 0.11 nT at 30 m from induction alone (half of it to the side)', () => {
    const moment = inducedSphereMoment(1000, 50_000);
    const over = field((b) => addDipole(b, 0, 0, moment, 0, 0, 30));
    const beside = field((b) => addDipole(b, 0, 0, moment, 30, 0, 0));
    expect(over[2]).toBeCloseTo(0.113, 3);
    expect(beside[2]! / over[2]!).toBeCloseTo(-0.5, 12);
  });

  it('makes 1,500 to 6,000 nT at ground level (USGS OFR 83-702) with poles inside the working range, cut 2 m down', () => {
    const f = fieldDirection(70, 0).map((u) => 53_000 * u);
    const anomaly = (poleAM: number) => totalFieldAnomaly(field((b) => addVerticalPipe(b, { topAM: -poleAM, lengthM: 500 }, [0, 0, 2])), f);
    expect(anomaly(60)).toBeLessThan(1500);
    expect(anomaly(70)).toBeGreaterThan(1500);
    expect(anomaly(260)).toBeGreaterThan(6000);
    expect(anomaly(240)).toBeLessThan(6000);
    // The lower pole of a pipe hundreds of metres long changes nothing that an instrument could tell.
    const alone = totalFieldAnomaly(field((b) => addPole(b, -100, 0, 0, 2)), f);
    expect(Math.abs(anomaly(100) - alone)).toBeLessThan(0.05);
  });
});

describe('closed forms', () => {
  it('a pole makes 100 nT per A·m at 1 m, pointing away from it', () => {
    expectClose(field((b) => addPole(b, 1, 1, 0, 0)), [100, 0, 0], 1e-12);
    expectClose(field((b) => addPole(b, -8, 0, 0, 2)), [0, 0, -200], 1e-12);
  });

  it('a dipole is the limit of two poles', () => {
    const [m, r, d] = [[3, -2, 5], [2.1, -0.7, 1.9], 1e-3] as const;
    const norm = Math.hypot(...m);
    const [ex, ey, ez] = m.map((c) => (c / norm) * d / 2) as [number, number, number];
    const pair = field((b) => {
      addPole(b, norm / d, r[0] - ex, r[1] - ey, r[2] - ez);
      addPole(b, -norm / d, r[0] + ex, r[1] + ey, r[2] + ez);
    });
    const exact = field((b) => addDipole(b, m[0], m[1], m[2], r[0], r[1], r[2]));
    expectClose(pair, exact, 1e-4 * Math.hypot(...exact));
  });

  it('a finite line is the sum of its dipoles, for a moment in any direction', () => {
    const line: HorizontalLine = { azimuthDeg: 25, halfLengthM: 6, momentPerM: [1.5, -0.8, 2.2] };
    const [ux, uy] = [Math.sin((25 * Math.PI) / 180), Math.cos((25 * Math.PI) / 180)];
    for (const r of [[3, 1, 2], [-8, 5, 1.5], [2, 9, 3]] as const) {
      const steps = 4000;
      const summed = field((b) => {
        for (let i = 0; i < steps; i++) {
          const [t, w] = [-6 + (12 * (i + 0.5)) / steps, 12 / steps];
          addDipole(b, 1.5 * w, -0.8 * w, 2.2 * w, r[0] - t * ux, r[1] - t * uy, r[2]);
        }
      });
      expectClose(field((b) => addHorizontalLine(b, line, r)), summed, 1e-5 * Math.hypot(...summed));
    }
  });

  it('a long line is a line without ends', () => {
    const momentPerM = [0.4, -0.3, 2] as const;
    const endless = field((b) => addHorizontalLine(b, { azimuthDeg: 110, halfLengthM: Infinity, momentPerM }, [1, 2, 1.5]));
    const long = field((b) => addHorizontalLine(b, { azimuthDeg: 110, halfLengthM: 1e4, momentPerM }, [1, 2, 1.5]));
    expectClose(long, endless, 1e-5);
  });

  it('pole and dipole fields have neither divergence nor curl', () => {
    const h = 1e-4;
    const at = [(b: number[], x: number, y: number, z: number) => addPole(b, 2, x, y, z),
      (b: number[], x: number, y: number, z: number) => addDipole(b, 1, 2, -3, x, y, z),
      (b: number[], x: number, y: number, z: number) => addHorizontalLine(b, { azimuthDeg: 40, halfLengthM: 5, momentPerM: [1, 2, -3] }, [x, y, z])];
    for (const add of at) {
      const J = [0, 1, 2].map((axis) => {
        const step = [0, 0, 0].map((_, i) => (i === axis ? h : 0)) as [number, number, number];
        const up = field((b) => add(b, 1.1 + step[0], 0.7 + step[1], 2 + step[2]));
        const down = field((b) => add(b, 1.1 - step[0], 0.7 - step[1], 2 - step[2]));
        return up.map((v, i) => (v - down[i]!) / (2 * h));
      });
      expect(Math.abs(J[0]![0]! + J[1]![1]! + J[2]![2]!)).toBeLessThan(1e-5);
      expect(Math.abs(J[0]![1]! - J[1]![0]!)).toBeLessThan(1e-5);
      expect(Math.abs(J[0]![2]! - J[2]![0]!)).toBeLessThan(1e-5);
      expect(Math.abs(J[1]![2]! - J[2]![1]!)).toBeLessThan(1e-5);
    }
  });
});

describe('total-field anomaly', () => {
  const unit = fieldDirection(65, 5);
  const f = unit.map((u) => 52_000 * u);

  it('is |F + B| − |F|', () => {
    const b = [1200, -800, -3000];
    expect(totalFieldAnomaly(b, f)).toBeCloseTo(Math.hypot(f[0]! + b[0]!, f[1]! + b[1]!, f[2]! + b[2]!) - 52_000, 8);
  });

  it('keeps its digits where the source is a billionth of the field, and there equals the projection', () => {
    const b = [2e-5, 1e-5, -4e-5];
    expect(totalFieldAnomaly(b, f) / projectedAnomaly(b, unit)).toBeCloseTo(1, 8);
  });

  it('a top that attracts makes a positive anomaly in the northern hemisphere', () => {
    expect(totalFieldAnomaly(field((b) => addPole(b, -100, 0, 0, 3)), f)).toBeGreaterThan(900);
    expect(totalFieldAnomaly([0, 0, 0], f)).toBe(0);
  });
});
