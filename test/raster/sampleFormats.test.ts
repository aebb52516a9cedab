import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { gridStatistics } from '../../src/raster/gridStatistics.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import { SAMPLE_FORMATS, sampleScaling, toSamples } from '../../src/raster/sampleFormats.js';
import { deflate, madeGrid } from './made.js';

describe('sampleScaling', () => {
  it.each(['int16', 'byte'] as const)('holds the ends of the range in %s, whatever its size and place', (kind) => {
    const { lowest, highest } = SAMPLE_FORMATS[kind];
    for (const [minimum, maximum] of [[-52.25, 2027.75], [0, 1], [49_999.9, 50_000.1], [-1e-6, 3e-6], [-7e8, 1e9], [1 / 3, 2 / 3]] as const) {
      const scaling = sampleScaling(kind, { minimum, maximum });
      const samples = toSamples(Float64Array.of(minimum, maximum, (minimum + maximum) / 2), SAMPLE_FORMATS[kind], scaling);
      expect([...samples.subarray(0, 2)]).toEqual([lowest, highest]);
      expect(Math.abs(samples[2]! * scaling.scale + scaling.offset - (minimum + maximum) / 2)).toBeLessThanOrEqual(scaling.scale * (0.5 + 1e-6));
    }
  });

  it('holds a grid of one value as it is', () => {
    const scaling = sampleScaling('byte', { minimum: 42.5, maximum: 42.5 });
    expect(toSamples(Float64Array.of(42.5), SAMPLE_FORMATS.byte, scaling)[0]! * scaling.scale + scaling.offset).toBe(42.5);
  });

  it('refuses what is no range', () => {
    for (const [minimum, maximum] of [[1, 0], [NaN, 1], [0, Infinity]] as const) expect(() => sampleScaling('byte', { minimum, maximum })).toThrow(RangeError);
  });

  it('makes a preview of a grid, right to half a step', async () => {
    const grid = madeGrid({ width: 90, height: 70, gaps: 'some' });
    const { scale, offset } = sampleScaling('byte', gridStatistics(grid.values)!);
    const { grid: back } = await readGeoTiff(await encodeCog(grid, { crs: crs(26917), deflate, sample: 'byte', scale, offset }));
    const wrong = [...back.values].filter((value, i) => (Number.isNaN(grid.values[i]!) ? !Number.isNaN(value) : !(Math.abs(value - grid.values[i]!) <= scale * (0.5 + 1e-6))));
    expect(wrong).toEqual([]);
  });
});
