import { estimateLineSpacing } from '../grid/estimateLineSpacing.js';
import { GRID_DEFAULTS, gridReadings, type GridOptions } from '../grid/gridReadings.js';
import type { Readings } from '../readings/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, quantitySchema } from './schema.js';
import type { Operation } from './types.js';

/** Reduced readings to a grid of the residual. */
export const grid: Operation = {
  id: 'grid',
  version: '1.0.0',
  title: 'Readings to a residual grid',
  summary: 'Lays a surface of minimum curvature in tension through the reduced readings; cells beyond a stated reach from readings stay empty.',
  parameters: objectSchema({
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
  },
  sources: [
    'Briggs (1974), Machine contouring using minimum curvature, Geophysics 39, 39-48',
    'Smith & Wessel (1990), Gridding with continuous curvature splines in tension, Geophysics 55, 293-305',
    'Trottenberg, Oosterlee & Schüller (2001), Multigrid, Academic Press',
    'Felzenszwalb & Huttenlocher (2012), Distance transforms of sampled functions, Theory of Computing 8, 415-428',
  ],
  example: 'ironplat grid --survey survey.json --cell-m 1 --out delivery',
  async run({ parameters, inputs, progress, warn }) {
    const options = camelKeys<GridOptions>(parameters);
    const { x, y, line, flag, residual } = inputs.readings as Readings;
    const value = residual.map((nT, n) => (flag[n] === 0 ? nT : NaN));
    const spacingM = options.spacingM ?? estimateLineSpacing({ x, y, line, flag });
    const result = gridReadings({ x, y, value }, { ...options, spacingM });
    for (const note of result.notes) progress(note);
    for (const warning of result.warnings) warn(warning);
    return { residual: result };
  },
};
