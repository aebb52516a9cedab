import { UserError } from '../../errors.js';
import { inverseRealFft2, realFft2, spectrumStride } from '../../numerics/fft2.js';
import { fftGoodSize } from '../../numerics/fftGoodSize.js';
import type { Grid } from '../../raster/types.js';
import { fillTorus } from './fillTorus.js';
import { planeAt, rimPlane } from './rimPlane.js';
import type { Plane, SpectralOperator } from './types.js';

export interface SpectralOptions {
  /** Cells added between the grid's edges, as a share of its width and height. */
  readonly padShare?: number;
  /** They span at least this, metres: as far as the operator reaches. */
  readonly padM?: number;
}

export const SPECTRAL_DEFAULTS = Object.freeze({
  /** Half as much again: an anomaly at one edge then lies half a grid from the other edge on its way round. */
  padShare: 0.5,
  padM: 0,
});

/** Even a small grid gets these: a few cells are no room to lead an edge to zero. */
const LEAST_PAD_CELLS = 16;
/** Outside the edge the field falls by e over this share of the padding, so that e⁻² is left half-way. */
const DECAY_SHARE = 0.25;
/** 1 GiB of doubles. A larger grid has to be cut into tiles first. */
const MOST_CELLS = 2 ** 27;

/** A grid that is ready for any number of operators. */
export interface Spectrum {
  readonly grid: Grid;
  readonly plane: Plane;
  /** Size with padding, cells. */
  readonly width: number;
  readonly height: number;
  /** Half spectrum as `realFft2` leaves it. */
  readonly numbers: Float64Array;
}

/**
 * Takes the plane of its rim off a grid, fills its gaps and leads its edges to zero with one smooth membrane on a
 * torus, and transforms it.
 *
 * Edges, measured with continuation, derivatives and reduction to the pole of poles and dipoles on a grid 40 depths wide
 * (depth below the sensor, four cells; fields of 65°, 30° and −55°): a source five depths or more inside an edge comes out
 * within 1 % of its peak right up to the edge. One depth inside it is within 3.5 % beyond two depths from the edge, and up
 * to 12 % at the edge. Of a source on the edge itself half is missing: only cells further inside are of use.
 */
export function spectrumOf(grid: Grid, options: SpectralOptions = {}): Spectrum {
  const { padShare, padM } = { ...SPECTRAL_DEFAULTS, ...options };
  const { cellM } = grid;
  const pad = (cells: number): number => Math.ceil(Math.max(LEAST_PAD_CELLS, padShare * cells, padM / cellM));
  const width = fftGoodSize(grid.width + pad(grid.width));
  const height = fftGoodSize(grid.height + pad(grid.height));
  if (width * height > MOST_CELLS) {
    throw new UserError({
      code: 'value_invalid', where: 'the grid to be transformed', found: `${grid.width} × ${grid.height} cells, ${width} × ${height} with padding`,
      wanted: `at most ${MOST_CELLS} cells with padding`, advice: 'grid with larger cells, or transform a part of the ground at a time',
    });
  }
  const stride = spectrumStride(width);
  const numbers = new Float64Array(height * stride);
  const known = new Uint8Array(width * height);
  const plane = rimPlane(grid);
  const planeValue = planeAt(plane, grid);
  let count = 0;
  for (let j = 0; j < grid.height; j++) {
    for (let i = 0; i < grid.width; i++) {
      const value = grid.values[j * grid.width + i]!;
      if (Number.isNaN(value)) continue;
      numbers[j * stride + i] = value - planeValue(i, j);
      known[j * width + i] = 1;
      count++;
    }
  }
  if (count === 0) throw new UserError({ code: 'no_data', where: 'the grid to be transformed', found: 'no cell with a value', wanted: 'a grid with values' });
  fillTorus({ width, height, stride, values: numbers, known }, DECAY_SHARE * Math.min(width - grid.width, height - grid.height));
  realFft2(numbers, { width, height });
  return { grid, plane, width, height, numbers };
}

/** The values of the grid after the operator, NaN where the grid is NaN. The spectrum stays as it was. */
export function applyOperator(spectrum: Spectrum, operator: SpectralOperator): Float64Array {
  return consume({ ...spectrum, numbers: spectrum.numbers.slice() }, operator);
}

/** One linear operator on a grid with gaps: see `spectrumOf` and `applyOperator`. */
export function spectral(grid: Grid, operator: SpectralOperator, options: SpectralOptions = {}): Float64Array {
  return consume(spectrumOf(grid, options), operator);
}

function consume({ grid, plane, width, height, numbers: field }: Spectrum, operator: SpectralOperator): Float64Array {
  const stride = spectrumStride(width);
  eachWave({ width, height, cellM: grid.cellM }, operator, (at, re, im) => {
    const a = field[at]!, b = field[at + 1]!;
    field[at] = a * re - b * im;
    field[at + 1] = a * im + b * re;
  });
  inverseRealFft2(field, { width, height });
  const planeValue = planeAt(operator.plane(plane), grid);
  const values = new Float64Array(grid.width * grid.height);
  for (let j = 0, n = 0; j < grid.height; j++) {
    for (let i = 0; i < grid.width; i++, n++) values[n] = Number.isNaN(grid.values[n]!) ? NaN : field[j * stride + i]! + planeValue(i, j);
  }
  return values;
}

interface Waves {
  readonly width: number;
  readonly height: number;
  readonly cellM: number;
}

/** Calls back for each number of a half spectrum with the operator's factor there. */
function eachWave({ width, height, cellM }: Waves, operator: SpectralOperator, call: (at: number, re: number, im: number) => void): void {
  const stride = spectrumStride(width);
  const perColumn = (2 * Math.PI) / (width * cellM);
  const perRow = (2 * Math.PI) / (height * cellM);
  const out = new Float64Array(2);
  for (let l = 0; l < height; l++) {
    // Rows run southwards.
    const north = -(l <= height / 2 ? l : l - height) * perRow;
    for (let k = 0; k <= width / 2; k++) {
      const east = k * perColumn;
      operator.response(east, north, out);
      let re = out[0]!, im = out[1]!;
      // The shortest wave the cells carry runs both ways at once; half of each keeps the result real.
      if (2 * k === width || 2 * l === height) {
        operator.response(2 * k === width ? -east : east, 2 * l === height ? -north : north, out);
        re = (re + out[0]!) / 2;
        im = (im + out[1]!) / 2;
      }
      call(l * stride + 2 * k, re, im);
    }
  }
}
