import { describe, expect, it } from 'vitest';
import type { Area } from '../../src/density/types.js';
import { openLines, type OpenLinesOptions } from '../../src/simulation/openLines.js';

const OPTIONS: OpenLinesOptions = { spacingM: 5, azimuthDeg: 0, marginM: 0, every: 1, firstLine: 1 };
const SQUARE: Area = [[[[0, 0], [100, 0], [100, 100], [0, 100]]]];
/** A U, open to the north, with an outer area of 100 × 100 less 40 × 60. */
const NOTCHED: Area = [[[[0, 0], [100, 0], [100, 100], [70, 100], [70, 40], [30, 40], [30, 100], [0, 100], [0, 0]]]];
const POND: Area = [[[[40, 10], [60, 10], [60, 30], [40, 30], [40, 10]]]];

function lengthM(pieces: ReturnType<typeof openLines>): number {
  return pieces.reduce((sum, { x0, y0, x1, y1 }) => sum + Math.hypot(x1 - x0, y1 - y0), 0);
}

describe('openLines', () => {
  it('covers a square with 20 lines to and fro', () => {
    const pieces = openLines(SQUARE, [], OPTIONS);
    expect(pieces).toHaveLength(20);
    expect(pieces[0]).toEqual({ line: 1, x0: 2.5, y0: 0, x1: 2.5, y1: 100 });
    expect(pieces[1]).toEqual({ line: 2, x0: 7.5, y0: 100, x1: 7.5, y1: 0 });
  });

  it.each([0, 17, 45, 90, 133, 270])('has length times spacing equal to the open ground at azimuth %d', (azimuthDeg) => {
    const pieces = openLines(NOTCHED, POND, { ...OPTIONS, spacingM: 0.5, azimuthDeg });
    expect(lengthM(pieces) * 0.5 / (10_000 - 2400 - 400)).toBeCloseTo(1, 2);
  });

  it('parts a line at a notch and at an exclusion, keeps its number and walks its pieces in order', () => {
    const pieces = openLines(NOTCHED, POND, { ...OPTIONS, azimuthDeg: 90 });
    const split = pieces.filter((piece) => pieces.some((other) => other !== piece && other.line === piece.line));
    expect(split.length).toBeGreaterThan(10);
    for (const line of new Set(split.map((piece) => piece.line))) {
      const [first, second] = split.filter((piece) => piece.line === line);
      const course = Math.sign(first!.x1 - first!.x0);
      expect(Math.sign(second!.x0 - first!.x1)).toBe(course);
    }
  });

  it('keeps the margin and leaves lines out on request', () => {
    const pieces = openLines(SQUARE, [], { ...OPTIONS, marginM: 2, every: 2, firstLine: 7 });
    expect(pieces).toHaveLength(10);
    expect(pieces[0]).toEqual({ line: 7, x0: 2.5, y0: 2, x1: 2.5, y1: 98 });
    expect(pieces[1]!.x0).toBe(12.5);
  });
});
