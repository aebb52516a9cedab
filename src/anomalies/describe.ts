import { ellipseOfCovariance } from '../density/ellipse.js';
import type { Covariance } from '../density/types.js';
import type { NoiseModel } from '../detection/types.js';
import { HALF_WIDTH_FACTORS } from '../field/halfWidth.js';
import { madSd, median } from '../numerics/robust.js';
import type { Grid } from '../raster/types.js';
import type { Readings } from '../readings/types.js';
import type { Site } from '../site/types.js';
import { straighten } from './alignment.js';
import type { Pipe } from './pipes.js';
import { LEAST_CHANCE, MOST_CHANCE, natureOf, type Candidates, type Nature, type PoleValues } from './classify.js';
import { parameterRange, type Fit, type Window } from './fitSources.js';
import { circleOutline, contourOutline } from './outline.js';
import { misfitOf, type Refined } from './refine.js';
import { anomalyAt } from './sourceField.js';
import type { SourceMap } from './sourceMap.js';
import { placeOf, type Source } from './sources.js';
import { blocksNear, type Survey } from './survey.js';
import type { Anomaly, AnomalyClass } from './types.js';
import { whiten } from './wander.js';

export interface DescribeContext {
  readonly map: SourceMap;
  readonly survey: Survey;
  readonly readings: Readings;
  readonly residual: Grid;
  readonly site: Site;
  readonly noise: NoiseModel;
  readonly settings: { readonly outlineSnr: number };
  readonly localRadiusM: number;
}

/** An anomaly that has no number yet, with what it rests on. */
export interface Draft {
  readonly anomaly: Anomaly;
  readonly refined: Refined;
  readonly nature: Nature;
}

/**
 * What the models leave out moves a source by about this share of the reach on each axis: a casing that leans by a degree
 * or two, collars between the depths that are tried, what neighbours leave, and the curvature of the field over a position
 * error (2 % of the reach by itself at 0.3 m over 3 m). Measured on made surveys.
 */
const UNMODELLED_REACHES = 0.035;

/** A class is given where its chance is at least this. */
const DECIDED = 0.5;
/** A place less certain than this share of the line spacing (one standard deviation on its axis) does not decide a class. */
const VAGUE_SPACINGS = 0.5;
/** A contour lies no higher than this share of the peak, so that a weak source has one too. */
const MOST_LEVEL = 0.5;

export function sourceAnomaly(refined: Refined, context: DescribeContext): Draft {
  const { survey, site } = context;
  const nature = natureOf(refined, { pole: asPole(refined.fits.pole), compact: asCompact(refined.fits.dipole) }, { target: site.target, reachM: survey.reachM });
  // Place and size are those of the kind that its class says.
  const fit = fitOfNature(refined, nature);
  const source = fit.sources[0]!;
  const [from] = parameterRange(fit.sources, 0);
  const misfit = misfitOf(fit);
  const variance = (a: number, b: number) => misfit * fit.covariance[(from + a) * fit.parameters + from + b]!;
  const [x, y] = placeOf(source);
  const unmodelledVar = (UNMODELLED_REACHES * survey.reachM) ** 2;
  const cov = source.kind === 'line' ? lineCovariance(source, variance(0, 0) + unmodelledVar, survey.windowM)
    : [variance(0, 0) + unmodelledVar, variance(0, 1), variance(1, 1) + unmodelledVar] as const;
  const { semiMajM, semiMinM, azimDeg } = ellipseOfCovariance(x, y, cov);
  const posSdM = Math.sqrt((cov[0] + cov[2]) / 2);
  const vague = source.kind !== 'line' && posSdM > VAGUE_SPACINGS * survey.spacingM;
  const { cls, why } = classOf(nature, { vague, misfit });
  const peakNT = peakOf(refined.window, { fit, source, survey });
  const outline = outlineOf({ source, fit, window: refined.window, x, y, peakNT }, context);
  const { kind, values } = source;
  return {
    refined, nature,
    anomaly: {
      anomalyId: '', class: cls, pCasing: Math.min(MOST_CHANCE, Math.max(LEAST_CHANCE, nature.casing)), x, y, cov, semiMajM, semiMinM, azimDeg, posSdM,
      peakNT, snr: deflectionOf(refined.window, fit, source) / Math.sqrt(misfit), depthM: -values[2]!, depthSdM: Math.sqrt(variance(2, 2)),
      poleAM: kind === 'pole' ? values[3]! : NaN, poleSdAM: kind === 'pole' ? Math.sqrt(variance(3, 3)) : NaN,
      momentAM2: kind === 'dipole' ? Math.hypot(values[3]!, values[4]!, values[5]!) : NaN,
      strikeDeg: kind === 'line' ? ((((values[1]! * 180) / Math.PI) % 180) + 180) % 180 : NaN,
      outline: outline.area, areaM2: outline.areaM2, note: why + outline.note,
    },
  };
}

function fitOfNature({ fit, fits }: Refined, { casing, otherPole, compact, linear }: Nature): Fit {
  const pole = casing + otherPole;
  if (pole >= compact && pole >= linear) return fits.pole ?? fit;
  return (compact >= linear ? fits.dipole : fits.line) ?? fit;
}

function asPole(fit: Fit | undefined): PoleValues | null {
  if (!fit) return null;
  const { values, sd } = ownValues(fit);
  return { poleAM: values[3]!, poleSdAM: sd(3), depthM: -values[2]!, depthSdM: sd(2) };
}

function asCompact(fit: Fit | undefined): Candidates['compact'] {
  if (!fit) return null;
  const { values, sd } = ownValues(fit);
  const [east, north, up] = [values[3]!, values[4]!, values[5]!];
  return {
    momentAM2: Math.hypot(east, north, up), depthM: -values[2]!, depthSdM: sd(2),
    offVerticalDeg: Math.atan2(Math.hypot(east, north), Math.abs(up)) * 180 / Math.PI,
  };
}

function ownValues(fit: Fit): { values: Float64Array; sd: (k: number) => number } {
  const [from] = parameterRange(fit.sources, 0);
  return { values: fit.sources[0]!.values, sd: (k) => Math.sqrt(fit.covariance[(from + k) * fit.parameters + from + k]!) };
}

/** A row of sources is one anomaly: a pipe, cable or fence. */
export function linearAnomaly({ run, pieces }: Pipe, { survey, map }: DescribeContext): Anomaly {
  const places = pieces.map(({ source }) => placeOf(source));
  const straight = straighten(places.map(([x, y]) => ({ x, y, sdM: 0 })));
  const azimuth = ((straight.azimuth % Math.PI) + Math.PI) % Math.PI;
  const s = Math.sin(azimuth);
  const c = Math.cos(azimuth);
  const halfM = (run.to - run.from) / 2;
  const middle = (run.from + run.to) / 2;
  // The middle of the run, moved across onto the straightened line.
  const [mx, my] = [run.x + middle * Math.sin(run.azimuth), run.y + middle * Math.cos(run.azimuth)];
  const off = (straight.x - mx) * c - (straight.y - my) * s;
  const x = mx + off * c;
  const y = my - off * s;
  const acrossVar = places.reduce((sum, [px, py]) => sum + ((px - x) * c - (py - y) * s) ** 2, 0) / places.length ** 2 + survey.motion.positionSdM ** 2 / places.length;
  const alongVar = halfM ** 2 / 3;
  const cov: Covariance = [alongVar * s * s + acrossVar * c * c, (alongVar - acrossVar) * s * c, alongVar * c * c + acrossVar * s * s];
  const { semiMajM, semiMinM, azimDeg } = ellipseOfCovariance(x, y, cov);
  const depths = pieces.map(({ source }) => -source.values[2]!);
  const outline = corridor({ x, y, azimuth, halfLengthM: halfM + survey.reachM }, survey.reachM);
  const own = new Map<number, number>();
  for (const { index, made } of pieces) index.forEach((i, k) => own.set(i, (own.get(i) ?? 0) + made[k]!));
  const left = madSd(Float64Array.from(own.keys(), (i) => survey.blocks.value[i]! - map.made[i]!));
  let peakNT = 0;
  let energy = 0;
  for (const [i, value] of own) {
    energy += value * value;
    if (Math.abs(value) > Math.abs(peakNT) && Math.abs(map.made[i]! - value) < Math.abs(value)) peakNT = value;
  }
  return {
    anomalyId: '', class: 'linear', pCasing: LEAST_CHANCE, x, y, cov, semiMajM, semiMinM, azimDeg, posSdM: Math.sqrt((cov[0] + cov[2]) / 2),
    peakNT, snr: Math.sqrt(energy * INDEPENDENT_BLOCKS) / Math.max(left, 1e-9), depthM: median(depths), depthSdM: madSd(depths),
    poleAM: NaN, poleSdAM: NaN, momentAM2: NaN, strikeDeg: (azimuth * 180) / Math.PI, outline: outline.area, areaM2: outline.areaM2,
    note: `${pieces.length} sources in a row over ${(2 * halfM).toFixed(0)} m: a pipe, cable or fence. The place is the middle of the row; the outline is its course, ${(2 * survey.reachM).toFixed(1)} m wide; depth is the median of its pieces.`,
  };
}

/** Of blocks a tenth of the reach long, about one in ten hears noise of its own. */
const INDEPENDENT_BLOCKS = 0.1;

interface Corridor {
  readonly x: number;
  readonly y: number;
  readonly azimuth: number;
  readonly halfLengthM: number;
}

function corridor({ x, y, azimuth, halfLengthM }: Corridor, halfWidthM: number): { area: Anomaly['outline']; areaM2: number } {
  const s = Math.sin(azimuth);
  const c = Math.cos(azimuth);
  const corner = (along: number, across: number): [number, number] => [x + along * s + across * c, y + along * c - across * s];
  const ring = [corner(-halfLengthM, -halfWidthM), corner(halfLengthM, -halfWidthM), corner(halfLengthM, halfWidthM), corner(-halfLengthM, halfWidthM)];
  return { area: [[[...ring, ring[0]!]]], areaM2: 4 * halfWidthM * halfLengthM };
}

function classOf(nature: Nature, { vague, misfit }: { readonly vague: boolean; readonly misfit: number }): { cls: AnomalyClass; why: string } {
  const percent = (p: number) => `${Math.round(100 * p)} %`;
  const chances = `casing ${percent(nature.casing)}, other pole ${percent(nature.otherPole)}, compact ${percent(nature.compact)}, line ${percent(nature.linear)}`;
  const strained = misfit > 2 ? ` The model leaves ${Math.sqrt(misfit).toFixed(1)} times the noise; its errors are widened by that.` : '';
  if (vague) return { cls: 'unresolved', why: `Too few readings hear it to place it (${chances}).${strained}` };
  if (nature.casing >= DECIDED) return { cls: 'casing', why: `A pole with strength and depth of a casing's top fits best (${chances}).${strained}` };
  if (nature.compact >= DECIDED) return { cls: 'compact', why: `A dipole fits best (${chances}).${strained}` };
  if (nature.linear >= DECIDED) return { cls: 'linear', why: `A horizontal line of dipoles fits best (${chances}).${strained}` };
  if (nature.otherPole >= DECIDED) return { cls: 'unresolved', why: `A pole fits best, but not with the strength and depth stated for a casing (${chances}).${strained}` };
  return { cls: 'unresolved', why: `The readings do not decide what it is (${chances}).${strained}` };
}

/** Across a line its fit speaks; along it nothing is known within the window. */
function lineCovariance(source: Source, acrossVar: number, windowM: number): Covariance {
  const s = Math.sin(source.values[1]!);
  const c = Math.cos(source.values[1]!);
  const alongVar = (2 * windowM) ** 2 / 12;
  return [alongVar * s * s + acrossVar * c * c, (alongVar - acrossVar) * s * c, alongVar * c * c + acrossVar * s * s];
}

/** Of the readings at which the source makes most of what sources make, the largest value above the local plane, nT. */
function peakOf(window: Window, { fit, source, survey }: { readonly fit: Fit; readonly source: Source; readonly survey: Survey }): number {
  let peak = 0;
  for (let k = 0; k < window.count; k++) {
    const own = anomalyAt([source], window.field, [window.x[k]!, window.y[k]!, window.z[k]!]);
    const value = window.value[k]! - planeAt(window, fit, window.x[k]!, window.y[k]!);
    if (Math.sign(own) === Math.sign(value) && Math.abs(own) > 0.5 * Math.abs(value) && Math.abs(value) > Math.abs(peak)) peak = value;
  }
  return peak === 0 ? anomalyAt([source], window.field, [...placeOf(source), survey.reachM + survey.expectedZM]) : peak;
}

function planeAt(window: Window, fit: Fit, x: number, y: number): number {
  return fit.plane[0] + (fit.plane[1] * (x - window.centreX) + fit.plane[2] * (y - window.centreY)) / window.radiusM;
}

/** Deflection d = √(sᵀC⁻¹s) of the fitted source, the part of it that a plane explains taken out. */
function deflectionOf(window: Window, fit: Fit, source: Source): number {
  const n = window.count;
  const columns = new Float64Array(4 * n);
  for (let k = 0; k < n; k++) {
    columns[k] = 1;
    columns[n + k] = (window.x[k]! - window.centreX) / window.radiusM;
    columns[2 * n + k] = (window.y[k]! - window.centreY) / window.radiusM;
    columns[3 * n + k] = anomalyAt([source], window.field, [window.x[k]!, window.y[k]!, window.z[k]!]);
  }
  whiten(window.walk, fit.model, columns);
  for (let r = 0; r < 4; r++) {
    for (let q = 0; q < r; q++) {
      let dot = 0;
      let size = 0;
      for (let k = 0; k < n; k++) {
        dot += columns[r * n + k]! * columns[q * n + k]!;
        size += columns[q * n + k]! ** 2;
      }
      if (size > 0) for (let k = 0; k < n; k++) columns[r * n + k]! -= (dot / size) * columns[q * n + k]!;
    }
  }
  let d2 = 0;
  for (let k = 0; k < n; k++) d2 += columns[3 * n + k]! ** 2;
  return Math.sqrt(d2);
}

interface OutlineOf {
  readonly source: Source;
  readonly fit: Fit;
  readonly window: Window;
  readonly x: number;
  readonly y: number;
  readonly peakNT: number;
}

function outlineOf({ source, fit, window, x, y, peakNT }: OutlineOf, { map, survey, residual, settings, localRadiusM }: DescribeContext) {
  const height = survey.reachM + survey.expectedZM;
  const nearby = map.near(x, y, 2 * survey.windowM).map((entry) => entry.source).filter((other) => other !== source);
  const quiet: number[] = [];
  for (const i of blocksNear(survey, [[x, y]], localRadiusM)) quiet.push(survey.blocks.value[i]! - map.made[i]!);
  const levelNT = Math.max(1e-9, Math.min(settings.outlineSnr * madSd(Float64Array.from(quiet)), MOST_LEVEL * Math.abs(peakNT)));
  const found = contourOutline(residual, {
    x, y, radiusM: survey.windowM, levelNT, whole: source.kind === 'line',
    background: (cx, cy) => planeAt(window, fit, cx, cy),
    owns: (cx, cy) => {
      const own = Math.abs(anomalyAt([source], survey.field, [cx, cy, height]));
      return nearby.every((other) => Math.abs(anomalyAt([other], survey.field, [cx, cy, height])) <= own);
    },
  });
  if (found) return { ...found, note: ` Outline at ${levelNT.toFixed(1)} nT.` };
  const distance = Math.max(survey.reachM / 4, height - source.values[2]!);
  return { ...circleOutline(x, y, distance / HALF_WIDTH_FACTORS.pole), note: ' The grid shows no contour here: the outline is the circle of half the fitted peak.' };
}
