import geomagnetism from 'geomagnetism';
import { UserError } from '../errors.js';
import type { MainField } from './types.js';

const RADIAN = Math.PI / 180;
const METRES_PER_KM = 1000;

/**
 * Issues of the World Magnetic Model, newest first, with the decimal years for which we let each one speak (one issue
 * a five-year term, its mid-term replacement from the day it came out) and an instant inside the term that the package
 * itself gives to that issue.
 */
const ISSUES = [
  { name: 'WMM2025', from: 2025, to: 2030, insideMs: Date.UTC(2025, 0, 1) },
  { name: 'WMM2020', from: 2020, to: 2025, insideMs: Date.UTC(2020, 0, 1) },
  { name: 'WMM2015v2', from: 2018.71, to: 2020, insideMs: Date.UTC(2019, 0, 1) },
  { name: 'WMM2015', from: 2015, to: 2018.71, insideMs: Date.UTC(2015, 0, 1) },
] as const;

/** First and last decimal year that the main field is known for. */
export const MAIN_FIELD_YEARS: readonly [number, number] = [ISSUES[ISSUES.length - 1]!.from, ISSUES[0].to];

/** The package's model object; its own declarations leave out two of the four coefficient arrays. */
interface TimedModel {
  main_field_coeff_g: number[];
  main_field_coeff_h: number[];
  secular_var_coeff_g: number[];
  secular_var_coeff_h: number[];
  point(latLonHeightKm: number[]): { f: number; incl: number; decl: number };
}

export interface MainFieldValue {
  readonly totalNT: number;
  /** Positive down. */
  readonly inclinationDeg: number;
  /** From true north, positive east. */
  readonly declinationDeg: number;
  /** Which issue of the model it comes from, such as `WMM2025`. */
  readonly model: string;
}

/**
 * Main field at a place and date.
 *
 * @param lonDeg, latDeg Geodetic, WGS 84, degrees.
 * @param heightM Above the ellipsoid, metres.
 * @param decimalYear Year plus days/365.
 * @returns Total field in nT, inclination and declination in degrees. A date outside the model's years is a UserError
 *   (`date_out_of_range`): secular variation is not extrapolated.
 *
 * Source: World Magnetic Model, NOAA/BGS technical reports (spherical harmonics to degree 12, linear secular variation),
 * through the `geomagnetism` package.
 */
export function mainFieldAt(lonDeg: number, latDeg: number, heightM: number, decimalYear: number): MainFieldValue {
  for (const value of [lonDeg, latDeg, heightM]) {
    if (!Number.isFinite(value)) throw new Error(`mainFieldAt: place is not a number: ${lonDeg}, ${latDeg}, ${heightM}`);
  }
  const issue = ISSUES.find(({ from, to }) => decimalYear >= from && decimalYear <= to);
  if (!issue) {
    throw new UserError({
      code: 'date_out_of_range', where: 'date of the survey', found: `the year ${Number.isFinite(decimalYear) ? decimalYear.toFixed(2) : decimalYear}`,
      wanted: `a date from ${MAIN_FIELD_YEARS[0]} to the end of ${MAIN_FIELD_YEARS[1] - 1}, the years of the World Magnetic Model`,
      advice: 'check the year; the main field is not extrapolated',
    });
  }
  const { f, incl, decl } = modelAt(issue.insideMs, decimalYear).point([latDeg, lonDeg, heightM / METRES_PER_KM]);
  return { totalNT: f, inclinationDeg: incl, declinationDeg: decl, model: issue.name };
}

/**
 * The package counts a date in milliseconds of a 365-day year and ends each issue weeks before its term. So the
 * coefficients are taken at an instant inside the term and carried to the decimal year here, along the issue's own
 * linear secular variation, to the last digit.
 */
function modelAt(insideMs: number, decimalYear: number): TimedModel {
  const model = geomagnetism.model(new Date(insideMs)) as unknown as TimedModel;
  const years = decimalYear - new Date(insideMs).getUTCFullYear();
  // Each call hands out arrays of its own, so they may be changed.
  model.secular_var_coeff_g.forEach((rate, i) => { model.main_field_coeff_g[i]! += years * rate; });
  model.secular_var_coeff_h.forEach((rate, i) => { model.main_field_coeff_h[i]! += years * rate; });
  return model;
}

/** Unit vector (easting, northing, up) of a field with this inclination, and this azimuth clockwise from grid north. */
export function fieldDirection(inclinationDeg: number, azimuthDeg: number): [number, number, number] {
  const i = inclinationDeg * RADIAN;
  const d = azimuthDeg * RADIAN;
  return [Math.cos(i) * Math.sin(d), Math.cos(i) * Math.cos(d), -Math.sin(i)];
}

export interface FramePlace {
  readonly lonDeg: number;
  readonly latDeg: number;
  /** Above the ellipsoid. */
  readonly heightM: number;
  readonly decimalYear: number;
  /** Grid convergence: grid north seen from true north, positive east. */
  readonly convergenceDeg: number;
}

/**
 * Main field as the survey's frame sees it: declination counts from true north, so the azimuth in the frame is
 * declination less grid convergence.
 */
export function mainFieldInFrame(place: FramePlace): MainField {
  const { totalNT, inclinationDeg, declinationDeg } = mainFieldAt(place.lonDeg, place.latDeg, place.heightM, place.decimalYear);
  return {
    totalNT, inclinationDeg, declinationDeg, convergenceDeg: place.convergenceDeg,
    unit: fieldDirection(inclinationDeg, declinationDeg - place.convergenceDeg),
  };
}
