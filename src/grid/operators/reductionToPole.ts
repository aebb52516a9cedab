import { UserError } from '../../errors.js';
import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

/** How the iron is magnetised: `vertical` as a casing or a pole, `along_field` as iron that the main field magnetises. */
export type Magnetisation = 'vertical' | 'along_field';

export interface PoleOptions extends SpectralOptions {
  readonly magnetisation?: Magnetisation;
  /** Where the field is flatter than this, waves across it are raised as if it dipped so far, degrees. */
  readonly steadyBelowDeg?: number;
}

export const POLE_DEFAULTS = Object.freeze({
  magnetisation: 'vertical' as Magnetisation,
  /** MacLeod, Jones & Dai (1993) keep the amplitude correction down to about 20°. */
  steadyBelowDeg: 20,
});

/**
 * A flatter field than this is refused. Waves across the field then stand in the data with less than a tenth of their
 * strength (sin 5° = 0.09; sin² 18° = 0.10), and what comes out across the field is noise or nothing.
 */
export const LEAST_INCLINATION_DEG: Readonly<Record<Magnetisation, number>> = Object.freeze({ vertical: 5, along_field: 18 });

/** Direction of the main field in the frame: inclination positive down, declination from grid north (declination less convergence). */
export interface FieldDirection {
  readonly inclinationDeg: number;
  readonly declinationDeg: number;
  /** Strength, nT; where it is given, anomalies too strong for the theory are warned of. */
  readonly totalNT?: number;
}

/**
 * The theory takes the anomaly for the source's field along the main field, which holds while it is small. Anomalies above
 * this share of the main field are warned of: over a pole the reduced field is then wrong by about 1 % of its peak where
 * the main field dips 65°, 2.5 % at 30° (measured; the error grows with the share).
 */
const LINEAR_SHARE = 0.05;

const rad = (deg: number): number => (deg * Math.PI) / 180;

/**
 * 1/Θ or 1/Θ² with Θ = sin I + i cos I cos(D − θ), θ the azimuth of the wave: from the total-field anomaly to the vertical
 * field (positive down) for a vertical casing, to the anomaly at the pole for iron along the field. The phase is exact at
 * any inclination; below `steadyBelowDeg` the amplitude is that of the steeper field. The
 * mean counts as vertical, 1/sin I or its square; a plane takes the factor's mean over all directions.
 *
 * Source: Blakely (1995), ch. 12.3; MacLeod, Jones & Dai (1993), Exploration Geophysics 24, 679-688 (pseudo-inclination).
 */
export function poleOperator({ inclinationDeg, declinationDeg }: FieldDirection, options: PoleOptions = {}): SpectralOperator {
  const { magnetisation, steadyBelowDeg } = { ...POLE_DEFAULTS, ...options };
  const power = magnetisation === 'vertical' ? 1 : 2;
  const sin = Math.sin(rad(inclinationDeg));
  const cos = Math.cos(rad(inclinationDeg));
  const steady = rad(Math.max(Math.abs(inclinationDeg), steadyBelowDeg));
  const sinSteady2 = Math.sin(steady) ** 2;
  const cosSteady2 = Math.cos(steady) ** 2;
  const fieldEast = Math.sin(rad(declinationDeg));
  const fieldNorth = Math.cos(rad(declinationDeg));
  return {
    response(east, north, out) {
      const k = Math.sqrt(east * east + north * north);
      const along = k > 0 ? (east * fieldEast + north * fieldNorth) / k : 0;
      const im = cos * along;
      const length = Math.sqrt(sin * sin + im * im);
      const steadyLength = Math.sqrt(sinSteady2 + cosSteady2 * along * along);
      // conj(Θ)/|Θ| turns the phase back, 1/|Θ| with the steeper field's Θ raises the amplitude.
      const re = sin / (length * steadyLength);
      const turn = -im / (length * steadyLength);
      out[0] = power === 1 ? re : re * re - turn * turn;
      out[1] = power === 1 ? turn : 2 * re * turn;
    },
    plane({ level, east, north }) {
      // A plane has no direction of its own: it takes the mean of 1/Θ or 1/Θ² over all directions, ± 1 or |sin I|.
      const factor = power === 1 ? Math.sign(sin) : Math.abs(sin);
      return { level: factor * level, east: factor * east, north: factor * north };
    },
  };
}

/**
 * Reduces a total-field anomaly (projected on the main field, nT) to the pole, nT. NaN stays NaN. Refused where the field
 * is flatter than `LEAST_INCLINATION_DEG`; steadied, with a warning, below `steadyBelowDeg`.
 */
export function reductionToPole(grid: Grid, field: FieldDirection, options: PoleOptions = {}): TransformedGrid {
  const { magnetisation, steadyBelowDeg } = { ...POLE_DEFAULTS, ...options };
  const { inclinationDeg, declinationDeg } = field;
  const least = LEAST_INCLINATION_DEG[magnetisation];
  const dip = Math.abs(inclinationDeg);
  if (!(dip >= least)) {
    throw new UserError({
      code: 'field_out_of_range', where: 'reduction to the pole', found: `a main field that dips ${inclinationDeg.toFixed(1)}°`,
      wanted: `at least ${least}° for ${magnetisation === 'vertical' ? 'a vertical casing' : 'iron along the field'}: in a flatter field waves across it hardly show in the readings, and raising them would raise noise`,
      advice: 'use the analytic signal instead',
    });
  }
  const warnings = dip >= steadyBelowDeg ? [] : [`the main field dips only ${inclinationDeg.toFixed(1)}°; waves across it are raised as for ${steadyBelowDeg}°, so that anomalies come out low and drawn out along the field`];
  let strongest = 0;
  for (const value of grid.values) if (Math.abs(value) > strongest) strongest = Math.abs(value);
  if (field.totalNT !== undefined && strongest > LINEAR_SHARE * field.totalNT) {
    warnings.push(`values reach ${strongest.toFixed(0)} nT, ${((100 * strongest) / field.totalNT).toFixed(0)} % of the main field: over so strong a source the reduced field is wrong by some per cent of its peak`);
  }
  const values = spectral(grid, poleOperator(field, options), options);
  const what = magnetisation === 'vertical' ? 'vertical field of vertical casings' : 'anomaly at the pole of iron along the field';
  return { ...grid, values, notes: [`reduced to the pole: ${what}, inclination ${inclinationDeg.toFixed(2)}°, declination from grid north ${declinationDeg.toFixed(2)}°`], warnings };
}
