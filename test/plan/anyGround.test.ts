import { describe, expect, it } from 'vitest';
import { areaBounds, areaM2, pointInArea } from '../../src/density/area.js';
import type { Area } from '../../src/density/types.js';
import { Random } from '../../src/numerics/random.js';
import { planSurvey } from '../../src/plan/planSurvey.js';
import { evenly, ring, testSite, toSegment } from './testSite.js';

/** A ragged star: concave, never crossing itself. */
function ragged(random: Random, [x, y]: readonly [number, number], radiusM: number): Area[number] {
  const corners = 7 + random.integer(25);
  return [ring(...Array.from({ length: corners }, (_, i): [number, number] => {
    const angle = (2 * Math.PI * i) / corners;
    const radius = radiusM * (0.45 + 0.55 * random.uniform());
    return [x + radius * Math.cos(angle), y + radius * Math.sin(angle)];
  }))];
}

describe('ground of any shape', () => {
  it.each(Array.from({ length: 16 }, (_, i) => i + 1))('number %d: lines stay on it, cover it and are walked once', (seed) => {
    const random = new Random(seed);
    const parcel: Area = [ragged(random, [400_000, 170_000], 200)];
    const exclusions: Area = Array.from({ length: random.integer(4) }, () =>
      ragged(random, [400_000 + 160 * (random.uniform() - 0.5), 170_000 + 160 * (random.uniform() - 0.5)], 12 + 30 * random.uniform()));
    const site = testSite(parcel, exclusions);
    const spacingM = 5 + 10 * random.uniform();
    const { lines, notes } = planSurvey(site, null, { spacingM, minLengthM: 3 });

    for (const { x0, y0, x1, y1, lengthM, azimDeg } of lines) {
      expect(lengthM).toBeCloseTo(Math.hypot(x1 - x0, y1 - y0), 9);
      expect(x0 + lengthM * Math.sin((azimDeg * Math.PI) / 180)).toBeCloseTo(x1, 6);
      // A corner that sticks into a line by less than five centimetres is walked over.
      const steps = Math.ceil(lengthM);
      const outside = Array.from({ length: steps }, (_, k) => (k + 0.5) / steps).filter((t) => !pointInArea(site.open, x0 + t * (x1 - x0), y0 + t * (y1 - y0)));
      expect(outside.length * 0.05).toBeLessThanOrEqual(0.1);
    }
    expect(new Set(lines.map(({ lineNo }) => lineNo)).size).toBe(lines.length);
    expect(lines.map(({ lineNo }) => lineNo).toSorted((a, b) => a - b)).toEqual(lines.map((_, i) => i + 1));

    const { west, south, east, north } = areaBounds(site.open);
    let [inside, far, farthest] = [0, 0, 0];
    for (let i = 0; i < 4000; i++) {
      const [a, b] = evenly(i);
      const [x, y] = [west + a * (east - west), south + b * (north - south)];
      if (!pointInArea(site.open, x, y)) continue;
      inside++;
      const distance = Math.min(...lines.filter(({ kind }) => kind === 'survey').map((line) => toSegment(x, y, line)));
      farthest = Math.max(farthest, distance);
      if (distance > spacingM / 2) far++;
    }
    expect(far / inside).toBeLessThan(0.015);
    expect(farthest).toBeLessThan(spacingM);
    const said = notes.map((note) => /([\d.]+) % of the ground \((\d+) m²\)/.exec(note)).find((match) => match !== null);
    // What is said is what is counted, within the chance of some hundreds of sample points.
    expect(Number(said?.[1] ?? 0)).toBeCloseTo((100 * far) / inside, 0);
    expect(areaM2(site.open)).toBeGreaterThan(0);
  });
});
