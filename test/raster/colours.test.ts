import { describe, expect, it } from 'vitest';
import { CHANCE_RAMP, RESIDUAL_RAMP, colourAt, hexColour, type Ramp } from '../../src/raster/colourRamps.js';
import { rampPlace, rampValue } from '../../src/raster/colourRange.js';
import { encodePng } from '../../src/raster/encodePng.js';
import { oklabLightness, oklchToSrgb, type Rgb } from '../../src/raster/oklab.js';
import { paintGrid } from '../../src/raster/paintGrid.js';
import { sldStyle } from '../../src/raster/sldStyle.js';
import { openWithGdal, withGdal } from '../support/gdal.js';
import { deflate, firstDifference, madeGrid } from './made.js';

const STEPS = Array.from({ length: 101 }, (_, i) => i / 100);

/** Source: Machado, Oliveira & Fernandes (2009), table of matrices at severity 1.0, in linear light. */
const DEUTERANOPIA = [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.01182, 0.04294, 0.968881]] as const;
const PROTANOPIA = [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]] as const;

function seenWith(matrix: ReadonlyArray<readonly [number, number, number]>, colour: Rgb): Rgb {
  const linear = colour.map((c) => (c / 255 <= 0.04045 ? c / 255 / 12.92 : ((c / 255 + 0.055) / 1.055) ** 2.4));
  const seen = matrix.map((row) => Math.min(1, Math.max(0, row[0] * linear[0]! + row[1] * linear[1]! + row[2] * linear[2]!)));
  return seen.map((c) => Math.round(255 * (c <= 0.0031308 ? 12.92 * c : 1.055 * c ** (1 / 2.4) - 0.055))) as unknown as Rgb;
}

function distance(a: Rgb, b: Rgb): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

describe('OKLab', () => {
  // Source: the published definition makes D65 white lightness 1 and black 0; sRGB red, green and blue as in Ottosson (2020) and CSS Color 4.
  it.each([
    [[255, 255, 255], 1], [[0, 0, 0], 0], [[255, 0, 0], 0.62796], [[0, 255, 0], 0.86644], [[0, 0, 255], 0.45201],
  ] as const)('%j has lightness %f', (colour, lightness) => expect(oklabLightness(colour)).toBeCloseTo(lightness, 4));

  it('goes to sRGB as CSS Color 4 has it, and keeps lightness where the colour cannot be shown', () => {
    expect(oklchToSrgb({ lightness: 0.62796, chroma: 0.25768, hueDeg: 29.234 })).toEqual([255, 0, 0]);
    const clipped = oklchToSrgb({ lightness: 0.6, chroma: 0.5, hueDeg: 150 });
    expect(oklabLightness(clipped)).toBeCloseTo(0.6, 2);
  });
});

describe('colour ramps', () => {
  const arms: ReadonlyArray<[string, Ramp, number[]]> = [
    ['chance', CHANCE_RAMP, STEPS],
    ['positive residual', RESIDUAL_RAMP, STEPS.map((t) => 0.5 + t / 2)],
    ['negative residual', RESIDUAL_RAMP, STEPS.map((t) => 0.5 - t / 2)],
  ];

  it.each(arms)('%s falls in lightness, evenly', (_, ramp, places) => {
    const lightness = places.map((t) => oklabLightness(colourAt(ramp, t)));
    const fall = (lightness[0]! - lightness.at(-1)!) / 100;
    for (let i = 10; i < lightness.length; i += 10) {
      expect((lightness[i - 10]! - lightness[i]!) / (10 * fall)).toBeGreaterThan(0.75);
      expect((lightness[i - 10]! - lightness[i]!) / (10 * fall)).toBeLessThan(1.25);
    }
  });

  it('shows the same strength for both signs', () => {
    for (const t of STEPS) {
      expect(Math.abs(oklabLightness(colourAt(RESIDUAL_RAMP, 0.5 + t / 2)) - oklabLightness(colourAt(RESIDUAL_RAMP, 0.5 - t / 2)))).toBeLessThan(0.01);
    }
  });

  it.each([['deuteranopia', DEUTERANOPIA], ['protanopia', PROTANOPIA]] as const)('tells the signs apart with %s', (_, matrix) => {
    for (const t of [0.2, 0.4, 0.6, 0.8, 1]) {
      const [above, below] = [seenWith(matrix, colourAt(RESIDUAL_RAMP, 0.5 + t / 2)), seenWith(matrix, colourAt(RESIDUAL_RAMP, 0.5 - t / 2))];
      expect(distance(above, below), `${above} ${below}`).toBeGreaterThan(40);
    }
  });

  it('ends at its ends and refuses NaN', () => {
    expect(colourAt(CHANCE_RAMP, -3)).toEqual(colourAt(CHANCE_RAMP, 0));
    expect(colourAt(CHANCE_RAMP, 7)).toEqual(colourAt(CHANCE_RAMP, 1));
    expect(() => colourAt(CHANCE_RAMP, NaN)).toThrow('NaN');
    expect(hexColour([1, 255, 16])).toBe('#01ff10');
  });

  it.each([{ low: -20, high: 300 }, { low: -5000, high: 5000, knee: 5 }])('goes from value to place and back: %j', (range) => {
    for (const t of STEPS) expect(rampPlace(range, rampValue(range, t))).toBeCloseTo(t, 10);
    expect(rampPlace(range, range.low)).toBe(0);
    expect(rampPlace(range, range.high)).toBe(1);
    expect(rampPlace(range, NaN)).toBeNaN();
  });
});

describe('paintGrid and encodePng', () => {
  const range = { low: -60, high: 60 };
  const grid = madeGrid({ width: 61, height: 43, gaps: 'some' });

  it('paints each cell in the ramp\'s colour and leaves gaps clear', () => {
    const rgba = paintGrid(grid, RESIDUAL_RAMP, range);
    for (const [i, value] of grid.values.entries()) {
      const painted = rgba.slice(i * 4, i * 4 + 4);
      if (Number.isNaN(value)) expect([...painted]).toEqual([0, 0, 0, 0]);
      else {
        const wanted = colourAt(RESIDUAL_RAMP, rampPlace(range, value));
        expect(Math.max(...wanted.map((channel, c) => Math.abs(channel - painted[c]!)))).toBeLessThanOrEqual(2);
        expect(painted[3]).toBe(255);
      }
    }
  });

  it('gives a PNG that GDAL decodes to the same pixels', async () => {
    const rgba = paintGrid(grid, RESIDUAL_RAMP, range);
    const png = encodePng(rgba, grid, deflate);
    expect(firstDifference(encodePng(rgba, grid, deflate), png)).toBe(-1);
    const { raster, messages } = await openWithGdal({ 'a.png': png });
    expect(messages).toEqual([]);
    expect(raster!.size).toEqual([61, 43]);
    const decoded = await withGdal({ 'a.png': png }, async (api, dataset) => {
      const { local } = await api.gdal_translate(dataset, ['-of', 'ENVI', '-co', 'INTERLEAVE=BIP', '-q'], 'pixels');
      return api.Module.FS.readFile(local);
    });
    expect(firstDifference(decoded, rgba)).toBe(-1);
  });

  it('refuses pixels that do not fill the picture', () => {
    expect(() => encodePng(new Uint8Array(12), { width: 2, height: 2 }, deflate)).toThrow('2 × 2');
  });
});

describe('sldStyle', () => {
  const sld = sldStyle(RESIDUAL_RAMP, { low: -500, high: 500, knee: 5 }, { layer: 'residual', title: 'Residual <nT> & more', unit: 'nT' });
  const entries = [...sld.matchAll(/<ColorMapEntry color="(#[0-9a-f]{6})" quantity="([^"]+)" label="([^"]+)"\/>/g)];

  it('lists ascending values with the ramp\'s colours', () => {
    expect(entries.length).toBe(33);
    const values = entries.map(([, , quantity]) => Number(quantity));
    expect(values[0]).toBeCloseTo(-500, 3);
    expect(values.at(-1)).toBeCloseTo(500, 3);
    expect(values.every((value, i) => i === 0 || value > values[i - 1]!)).toBe(true);
    expect(entries[16]!.slice(1)).toEqual([hexColour(colourAt(RESIDUAL_RAMP, 0.5)), '0', '0 nT']);
  });

  it('escapes its title', () => expect(sld).toContain('<Title>Residual &lt;nT&gt; &amp; more</Title>'));
});
