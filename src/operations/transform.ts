import { UserError } from '../errors.js';
import { analyticSignal } from '../grid/operators/analyticSignal.js';
import { downwardContinuation } from '../grid/operators/downwardContinuation.js';
import { horizontalDerivative } from '../grid/operators/horizontalDerivative.js';
import { LINE_FILTER_DEFAULTS, lineFilter } from '../grid/operators/lineFilter.js';
import { POLE_DEFAULTS, reductionToPole, type Magnetisation } from '../grid/operators/reductionToPole.js';
import { tilt } from '../grid/operators/tilt.js';
import type { TransformedGrid } from '../grid/operators/types.js';
import { upwardContinuation } from '../grid/operators/upwardContinuation.js';
import { verticalDerivative } from '../grid/operators/verticalDerivative.js';
import { WAVE_FILTER_DEFAULTS, waveFilter, type FilterShape } from '../grid/operators/waveFilter.js';
import type { Grid } from '../raster/types.js';
import type { Site } from '../site/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, quantitySchema } from './schema.js';
import type { Operation } from './types.js';

interface TransformParameters {
  readonly kind: string;
  readonly heightM?: number;
  readonly noiseNt?: number;
  readonly azimuthDeg?: number;
  readonly wavelengthM?: number;
  readonly magnetisation: Magnetisation;
  readonly steadyBelowDeg: number;
  readonly shape: FilterShape;
  readonly order: number;
  readonly degree: number;
}

/** Parameters without a default: each kind takes those that mean something to it and refuses the others. */
type Own = 'height_m' | 'noise_nt' | 'azimuth_deg' | 'wavelength_m';

interface Kind {
  readonly needs: readonly Own[];
  readonly may?: readonly Own[];
  readonly unit: string;
  run(grid: Grid, parameters: TransformParameters, site: Site): TransformedGrid;
}

const KINDS: Readonly<Record<string, Kind>> = Object.freeze({
  upward: { needs: ['height_m'], unit: 'nT', run: (grid, { heightM }) => upwardContinuation(grid, heightM!) },
  downward: { needs: ['height_m', 'noise_nt'], unit: 'nT', run: (grid, { heightM, noiseNt }) => downwardContinuation(grid, heightM!, { noise: noiseNt! }) },
  vertical_derivative: { needs: [], unit: 'nT/m', run: (grid) => verticalDerivative(grid) },
  horizontal_derivative: { needs: ['azimuth_deg'], unit: 'nT/m', run: (grid, { azimuthDeg }) => horizontalDerivative(grid, azimuthDeg!) },
  reduction_to_pole: {
    needs: [], unit: 'nT',
    run: (grid, { magnetisation, steadyBelowDeg }, { mainField: { totalNT, inclinationDeg, declinationDeg, convergenceDeg } }) =>
      reductionToPole(grid, { inclinationDeg, declinationDeg: declinationDeg - convergenceDeg, totalNT }, { magnetisation, steadyBelowDeg }),
  },
  analytic_signal: { needs: [], unit: 'nT/m', run: (grid) => analyticSignal(grid) },
  tilt: { needs: [], unit: 'deg', run: (grid) => tilt(grid) },
  long_wave: { needs: ['wavelength_m'], unit: 'nT', run: (grid, { wavelengthM, shape, order }) => waveFilter(grid, wavelengthM!, { keep: 'long', shape, order }) },
  short_wave: { needs: ['wavelength_m'], unit: 'nT', run: (grid, { wavelengthM, shape, order }) => waveFilter(grid, wavelengthM!, { keep: 'short', shape, order }) },
  line_filter: {
    needs: ['azimuth_deg'], may: ['wavelength_m'], unit: 'nT',
    run: (grid, { azimuthDeg, wavelengthM, degree }) => lineFilter(grid, azimuthDeg!, { degree, ...(wavelengthM === undefined ? {} : { wavelengthM }) }),
  },
});

const OWN: readonly Own[] = ['height_m', 'noise_nt', 'azimuth_deg', 'wavelength_m'];

/** The residual grid to one further grid; runs only where the survey file asks for it, since `kind` has no default. */
export const transform: Operation = {
  id: 'transform',
  version: '1.0.0',
  title: 'Residual grid to a further grid',
  summary: 'Continues the residual up or down, takes derivatives, reduces it to the pole, or filters it; gaps are filled for the work and are gaps again after.',
  parameters: objectSchema({
    kind: { type: 'string', enum: Object.keys(KINDS), description: 'What is made of the residual; each transform takes one.' },
    height_m: quantitySchema('m', { minimum: 0, description: 'Upward and downward continuation: how far.', examples: [2, '5 ft'] }),
    noise_nt: quantitySchema('nT', { exclusiveMinimum: 0, description: 'Downward continuation: standard deviation of the value of a cell. It bounds how far down the grid can be taken.' }),
    azimuth_deg: quantitySchema('deg', { description: 'Horizontal derivative: direction of growth; line filter: direction of the lines. Clockwise from grid north.' }),
    wavelength_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'Wave filters: cut-off, a wave of that length is halved. Line filter: only shorter waves across the lines are taken out.' }),
    magnetisation: { type: 'string', enum: ['vertical', 'along_field'], default: POLE_DEFAULTS.magnetisation, description: 'Reduction to the pole: "vertical" for casings and poles, "along_field" for iron that the main field magnetises.' },
    steady_below_deg: quantitySchema('deg', { minimum: 0, maximum: 90, default: POLE_DEFAULTS.steadyBelowDeg, description: 'Reduction to the pole: in a flatter field, waves across it are raised as if it dipped so far.' }),
    shape: { type: 'string', enum: ['gaussian', 'butterworth'], default: WAVE_FILTER_DEFAULTS.shape, description: 'Wave filters: soft without overshoot, or steep.' },
    order: { type: 'integer', minimum: 1, maximum: 20, default: WAVE_FILTER_DEFAULTS.order, description: 'Steepness of the Butterworth filter.' },
    degree: { type: 'number', exclusiveMinimum: 0, default: LINE_FILTER_DEFAULTS.degree, description: 'Line filter: power of the cosine; the higher, the nearer to the lines a stripe has to run.' },
  }, { required: ['kind'] }),
  inputs: {
    residual: { title: 'Residual grid', form: 'grid', unit: 'nT' },
  },
  outputs: {
    transform: { title: 'Transformed grid', form: 'grid' },
  },
  sources: [
    'Blakely (1995), Potential Theory in Gravity and Magnetic Applications, ch. 12',
    'Wiener (1949), Extrapolation, Interpolation and Smoothing of Stationary Time Series',
    'Spector & Grant (1970), Statistical models for interpreting aeromagnetic data, Geophysics 35, 293-302',
    'MacLeod, Jones & Dai (1993), 3-D analytic signal in the interpretation of total magnetic field data at low magnetic latitudes, Exploration Geophysics 24, 679-688',
    'Nabighian (1972), The analytic signal of two-dimensional magnetic bodies, Geophysics 37, 507-517',
    'Roest, Verhoef & Pilkington (1992), Magnetic interpretation using the 3-D analytic signal, Geophysics 57, 116-125',
    'Miller & Singh (1994), Potential field tilt, Journal of Applied Geophysics 32, 213-217',
    'Butterworth (1930), On the theory of filter amplifiers, Wireless Engineer 7, 536-541',
  ],
  example: 'ironplat transform --survey survey.json --kind reduction_to_pole --out delivery',
  async run({ site, parameters, inputs, progress, warn }) {
    const name = parameters.kind as string;
    const kind = KINDS[name]!;
    for (const key of OWN) checkOwn(key, kind, { name, given: parameters[key] !== undefined });
    const { notes, warnings, ...grid } = kind.run(inputs.residual as Grid, camelKeys<TransformParameters>(parameters), site);
    notes.forEach(progress);
    warnings.forEach(warn);
    const { width, height, west, north, cellM, values } = grid;
    return { transform: { width, height, west, north, cellM, values, unit: kind.unit, notes, warnings } };
  },
};

function checkOwn(key: Own, { needs, may = [] }: Kind, { name, given }: { readonly name: string; readonly given: boolean }): void {
  if (needs.includes(key) && !given) {
    throw new UserError({ code: 'key_missing', where: 'transform', found: `no "${key}"`, wanted: `one, since "${name}" needs it` });
  }
  if (given && !needs.includes(key) && !may.includes(key)) {
    const of = [...needs, ...may];
    throw new UserError({ code: 'key_invalid', where: `transform, ${key}`, found: `a key that means nothing to "${name}"`, wanted: of.length > 0 ? `no keys of their own but ${of.join(', ')}` : 'none' });
  }
}
