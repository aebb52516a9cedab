import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { emptyPins, type Pins } from '../../src/grid/pins.js';
import { solvePlate } from '../../src/grid/solvePlate.js';

/** Weights of the values at −1, 0, 1. */
const lagrange = (t: number) => [-1, 0, 1].map((at) => [-1, 0, 1].filter((o) => o !== at).reduce((product, o) => product * (t - o) / (at - o), 1));

/** Energy's matrix built from its differences one by one, and the pins' rows from Lagrange's quadratic: nothing of the solver's own. */
function denseSolution({ width, height, alpha, tau, pins }: { width: number; height: number; alpha: number; tau: number; pins: Pins }): Float64Array {
  const n = width * height;
  const a = Array.from({ length: n }, () => new Float64Array(n + 1));
  const term = (weight: number, entries: Array<[number, number, number]>) => {
    if (entries.some(([i, j]) => i < 0 || j < 0 || i >= width || j >= height)) return;
    for (const [i, j, c] of entries) for (const [p, q, d] of entries) a[j * width + i]![q * width + p]! += weight * c * d;
  };
  for (let j = 0; j < height; j++) {
    for (let i = 0; i < width; i++) {
      term(alpha, [[i, j, 1], [i + 1, j, -2], [i + 2, j, 1]]);
      term(alpha, [[i, j, 1], [i, j + 1, -2], [i, j + 2, 1]]);
      term(2 * alpha, [[i, j, 1], [i + 1, j, -1], [i, j + 1, -1], [i + 1, j + 1, 1]]);
      term(tau, [[i, j, 1], [i + 1, j, -1]]);
      term(tau, [[i, j, 1], [i, j + 1, -1]]);
    }
  }
  pins.node.forEach((k, m) => {
    const row = a[k]!.fill(0);
    lagrange(pins.dy[m]!).forEach((wy, q) => lagrange(pins.dx[m]!).forEach((wx, p) => {
      if (wx * wy !== 0) row[k + (q - 1) * width + p - 1]! += wx * wy;
    }));
    row[n] = pins.value[m]!;
  });
  // Gauss with pivoting.
  for (let c = 0; c < n; c++) {
    let best = c;
    for (let r = c + 1; r < n; r++) if (Math.abs(a[r]![c]!) > Math.abs(a[best]![c]!)) best = r;
    [a[c], a[best]] = [a[best]!, a[c]!];
    for (let r = c + 1; r < n; r++) {
      const factor = a[r]![c]! / a[c]![c]!;
      if (factor !== 0) for (let s = c; s <= n; s++) a[r]![s]! -= factor * a[c]![s]!;
    }
  }
  const z = new Float64Array(n);
  for (let r = n - 1; r >= 0; r--) {
    let sum = a[r]![n]!;
    for (let s = r + 1; s < n; s++) sum -= a[r]![s]! * z[s]!;
    z[r] = sum / a[r]![r]!;
  }
  return z;
}

function randomPins([width, height, count]: [number, number, number], { seed, offset }: { seed: number; offset: number }): Pins {
  const random = new Random(seed);
  const nodes = new Set<number>();
  while (nodes.size < count) nodes.add((1 + random.integer(height - 2)) * width + 1 + random.integer(width - 2));
  const pins = emptyPins(count);
  [...nodes].toSorted((a, b) => a - b).forEach((node, n) => {
    pins.node[n] = node;
    pins.value[n] = random.normal();
    pins.dx[n] = offset * (random.uniform() - 0.5);
    pins.dy[n] = offset * (random.uniform() - 0.5);
    pins.weight[n] = 1;
  });
  return pins;
}

describe('solvePlate against a direct solution of the same equations', () => {
  it.each([
    { width: 24, height: 24, pins: 30, tension: 0, offset: 0 },
    { width: 24, height: 24, pins: 30, tension: 0, offset: 1 },
    { width: 31, height: 17, pins: 60, tension: 0.25, offset: 1 },
    { width: 18, height: 30, pins: 12, tension: 1, offset: 0 },
    { width: 7, height: 40, pins: 20, tension: 0.5, offset: 0.6 },
    { width: 20, height: 20, pins: 200, tension: 0, offset: 1 },
    { width: 5, height: 6, pins: 4, tension: 0, offset: 0 },
  ])('$width × $height nodes, $pins pins off by up to $offset/2, tension $tension', ({ width, height, pins: count, tension, offset }) => {
    const pins = randomPins([width, height, count], { seed: width * height, offset });
    const problem = { width, height, alpha: 1 - tension, tau: tension / 9, pins, watch: null };
    const range = Math.max(...pins.value) - Math.min(...pins.value);
    const solved = solvePlate(problem, { tolerance: 2e-5 * range, maxSteps: 200 });
    const direct = denseSolution(problem);
    let worst = 0;
    for (let k = 0; k < direct.length; k++) worst = Math.max(worst, Math.abs(direct[k]! - solved.z[k]!));
    expect(solved.converged).toBe(true);
    expect(worst / range).toBeLessThan(1e-4);
  });

  it('goes on to any tolerance, and says so where it may not', () => {
    const pins = randomPins([60, 60, 200], { seed: 5, offset: 1 });
    const problem = { width: 60, height: 60, alpha: 0.75, tau: 0.01, pins, watch: null };
    const fine = solvePlate(problem, { tolerance: 1e-11, maxSteps: 500 });
    expect(fine.converged).toBe(true);
    const coarse = solvePlate(problem, { tolerance: 1e-4, maxSteps: 500 });
    let worst = 0;
    for (let k = 0; k < fine.z.length; k++) worst = Math.max(worst, Math.abs(fine.z[k]! - coarse.z[k]!));
    expect(worst).toBeGreaterThan(1e-8);
    expect(worst).toBeLessThan(5e-4);
    const stopped = solvePlate(problem, { tolerance: 1e-11, maxSteps: 3 });
    expect(stopped.converged).toBe(false);
    expect(stopped.iterations).toBe(3);
  });

  it.each([4, 10, 24, 60])('needs no more cycles where lines are %i nodes apart, and leaves no more than it says', (apart) => {
    const [width, height] = [150, 240];
    const random = new Random(apart);
    const places: Array<[node: number, dx: number, dy: number]> = [];
    for (let line = apart / 2; line < height - 1; line += apart) {
      let off = 0;
      for (let i = 1; i < width - 1; i += 2) {
        off = 0.98 * off + 0.1 * random.normal();
        const j = Math.min(height - 2, Math.max(1, Math.round(line + off)));
        places.push([j * width + i, random.uniform() - 0.5, Math.min(0.5, Math.max(-0.5, line + off - j))]);
      }
    }
    places.sort(([a], [b]) => a - b);
    const pins: Pins = { ...emptyPins(places.length), node: Int32Array.from(places, ([node]) => node), dx: Float64Array.from(places, ([, dx]) => dx), dy: Float64Array.from(places, ([, , dy]) => dy) };
    // A steep spot among gentle waves and noise: the last cycles run in a window around it.
    pins.node.forEach((node, n) => {
      const [x, y] = [node % width, Math.floor(node / width)];
      pins.value[n] = Math.sin(x / 30) + Math.cos(y / 50) + 0.05 * random.normal() + 4e3 / ((x - 40) ** 2 + (y - 70) ** 2 + 16) ** 1.5;
      pins.weight[n] = 1;
    });
    const problem = { width, height, alpha: 0.75, tau: 0.25 / apart ** 2, pins, watch: null };
    const tolerance = 1e-4;
    const solved = solvePlate(problem, { tolerance, maxSteps: 40 });
    const fine = solvePlate(problem, { tolerance: 1e-8, maxSteps: 500 });
    expect(fine.converged && solved.converged).toBe(true);
    expect(solved.iterations).toBeLessThan(20);
    expect(solved.z.reduce((worst, value, k) => Math.max(worst, Math.abs(value - fine.z[k]!)), 0)).toBeLessThan(2 * tolerance);
  });
});
