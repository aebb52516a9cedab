import { describe, expect, it } from 'vitest';
import { lineErrors } from '../../src/grid/lineErrors.js';
import { Random } from '../../src/numerics/random.js';

const random = new Random(8);
/** Noise and number of readings of each line. */
const LINES = [[0.5, 1_000], [5, 1_000], [2, 20], [0, 200], [1, 1_000]] as const;
const value: number[] = [];
const line: number[] = [];
LINES.forEach(([noiseNT, count], l) => {
  // One line stands still; waves 60 readings long, and a spike in a hundred.
  for (let n = 0; n < count; n++) value.push(noiseNT === 0 ? 40 : 100 * Math.sin(n / 10) + noiseNT * random.normal() + (n % 100 === 50 ? 3_000 : 0));
  for (let n = 0; n < count; n++) line.push(l);
});
value.push(1, 2, 3);
line.push(-1, -1, -1);

describe('lineErrors', () => {
  const { sd, note } = lineErrors({ value, line });
  const of = (l: number): number => sd![line.indexOf(l)]!;

  it.each([0, 1, 4])('are the noise of line %i, within a fifth', (l) => {
    expect(of(l) / LINES[l]![0]).toBeGreaterThan(0.8);
    expect(of(l) / LINES[l]![0]).toBeLessThan(1.2);
  });

  it('are the survey\'s for lines that are too short or stand still, and for readings on no line', () => {
    expect(of(2)).toBe(of(3));
    expect(of(-1)).toBe(of(3));
    expect(of(3)).toBeGreaterThan(of(0));
    expect(of(3)).toBeLessThan(of(1));
  });

  it('are told with their range', () => {
    const told = note.match(/^Readings count by the noise of their line, ([\d.]+) to ([\d.]+) nT; 2 lines, .* with ([\d.]+) nT\.$/)!;
    [0, 1, 3].forEach((l, n) => expect(Number(told[n + 1])).toBeCloseTo(of(l), 1));
  });

  it.each([
    ['stand still', Array.from({ length: 200 }, () => 1), Array.from({ length: 200 }, () => 0)],
    ['are short', value.slice(0, 20), line.slice(0, 20)],
    ['are none', value.slice(0, 200), line.slice(0, 200).map(() => -1)],
  ])('do not exist where lines %s', (_, values, lines) => {
    expect(lineErrors({ value: values, line: lines })).toEqual({ sd: null, note: expect.stringMatching(/all count alike/) });
  });
});
