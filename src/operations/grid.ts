import { estimateLineSpacing } from '../grid/estimateLineSpacing.js';
import { GRID_METHODS, gridByMethod, METHOD_DEFAULTS, type MethodOptions } from '../grid/gridByMethod.js';
import { GRID_DEFAULTS } from '../grid/gridOptions.js';
import { lineErrors } from '../grid/lineErrors.js';
import { streamByMethod } from '../grid/streamByMethod.js';
import type { Readings } from '../readings/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, quantitySchema } from './schema.js';
import type { Operation } from './types.js';

/** Reduced readings to a grid of the residual. */
export const grid: Operation = {
  id: 'grid',
  version: '1.2.0',
  title: 'Readings to a residual grid',
  summary: 'Lays a surface of minimum curvature in tension through the reduced readings, explains them by a layer of sources below, or joins them by triangles; cells beyond a stated reach from readings stay empty. On request each cell has its standard error.',
  parameters: objectSchema({
    method: { type: 'string', enum: [...GRID_METHODS], default: METHOD_DEFAULTS.method, description: '"tension" is quickest and takes no notice of the sensor\'s height; "sources" allows for it and keeps nearer to the field between lines further apart than the sources are deep; "auto" takes tension only where lines are closer than 0.8 times that depth, the sensor kept its height and readings are about equally good, else sources; "linear" goes straight across Delaunay triangles of the readings and leaves cells outside their hull empty.' },
    weights: { type: 'string', enum: ['equal', 'line'], default: 'equal', description: 'How readings count that share a cell, a place or a window: "equal", all alike; "line", by the noise of their own line (inverse variance, from fourth differences), for surveys with more than one sensor. Not with noise_nt.' },
    error: { type: 'boolean', default: METHOD_DEFAULTS.error, description: 'Also write a grid of the standard error of each cell, empty where the readings leave the field unknown.' },
    noise_nt: quantitySchema('nT', { minimum: 0, description: 'Standard deviation of the error of a reading, for sources and error; unsaid, it is taken from the readings.' }),
    cell_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'Side of a cell; unsaid, a fifth of the line spacing, rounded.', examples: [1, '2 ft'] }),
    spacing_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'Distance between lines; unsaid, it is estimated from the readings.' }),
    tension: { type: 'number', minimum: 0, maximum: 1, default: GRID_DEFAULTS.tension, description: '0 is minimum curvature, 1 a membrane; it works over lengths that the line spacing sets.' },
    reach_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'No cell is filled further than this from a reading; unsaid, three quarters of the line spacing.' }),
    tolerance: { type: 'number', exclusiveMinimum: 0, maximum: 0.1, default: GRID_DEFAULTS.tolerance, description: 'Largest error that the solver may leave, as a share of the range of the readings.' },
    max_steps: { type: 'integer', minimum: 1, default: GRID_DEFAULTS.maxSteps, description: 'The solver stops here and says so.' },
  }),
  inputs: {
    readings: { title: 'Reduced readings', form: 'readings' },
  },
  outputs: {
    residual: { title: 'Residual grid', form: 'grid', unit: 'nT' },
    residual_error: { title: 'Standard error of the residual grid', form: 'grid', unit: 'nT', optional: true },
  },
  sources: [
    'Briggs (1974), Machine contouring using minimum curvature, Geophysics 39, 39-48',
    'Smith & Wessel (1990), Gridding with continuous curvature splines in tension, Geophysics 55, 293-305',
    'Delaunay (1934), Sur la sphère vide, Bulletin de l\'Académie des Sciences de l\'URSS 6, 793-800',
    'Dampney (1969), The equivalent source technique, Geophysics 34, 39-53',
    'Moritz (1980), Advanced Physical Geodesy, ch. 11 (least norm and collocation)',
    'Mardia & Marshall (1984), Maximum likelihood estimation of models for residual covariance in spatial regression, Biometrika 71, 135-146',
    'Trottenberg, Oosterlee & Schüller (2001), Multigrid, Academic Press',
    'Felzenszwalb & Huttenlocher (2012), Distance transforms of sampled functions, Theory of Computing 8, 415-428',
  ],
  example: 'ironplat grid --survey survey.json --cell-m 1 --out delivery',
  async run({ parameters, inputs, solveTile, progress, warn }) {
    const { weights, ...given } = camelKeys<MethodOptions & { readonly weights: 'equal' | 'line' }>(parameters);
    const { x, y, heightM, line, flag, residual } = inputs.readings as Readings;
    const value = residual.map((nT, n) => (flag[n] === 0 ? nT : NaN));
    const errors = weights === 'line' ? lineErrors({ value, line }) : null;
    if (errors) (errors.sd ? progress : warn)(errors.note);
    const samples = { x, y, up: heightM, line, value, ...(errors?.sd ? { sd: errors.sd } : {}) };
    const spacingM = given.spacingM ?? estimateLineSpacing({ x, y, line, flag });
    const options = { ...given, spacingM, ...(solveTile ? { solve: solveTile } : {}) };
    const streamed = streamByMethod(samples, options);
    if (streamed) {
      // What is known of the cells stands in the report; the rest is told once the grid is written.
      for (const warning of streamed.remarks().warnings) warn(warning);
      return { residual: streamed };
    }
    const { grid: result, error } = await gridByMethod(samples, options);
    for (const note of result.notes) progress(note);
    for (const warning of result.warnings) warn(warning);
    return error ? { residual: result, residual_error: error } : { residual: result };
  },
};
