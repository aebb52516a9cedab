import { demoFiles, type DemoOptions } from '../../fixtures/demo/generate.js';
import { distanceTo } from '../../fixtures/demo/ground.js';
import type { Anomalies } from '../../src/anomalies/types.js';
import type { Finding, Findings } from '../../src/findings/types.js';
import { BUILT_IN_OPERATIONS } from '../../src/operations/index.js';
import type { Grid } from '../../src/raster/types.js';
import type { Readings } from '../../src/readings/types.js';
import type { Records } from '../../src/records/types.js';
import { readSurvey } from '../../src/survey/readSurvey.js';
import { runSurvey, type RunResult } from '../../src/survey/runSurvey.js';
import { memoryHost } from './memoryHost.js';

/** A made field day that went through the whole chain, with what is really in the ground. */
export interface RunDay {
  readonly result: RunResult;
  readonly records: Records;
  readonly readings: Readings;
  readonly anomalies: Anomalies;
  readonly detection: Grid;
  readonly findings: Findings;
  readonly truth: DayTruth;
}

export interface DayTruth {
  readonly casings: ReadonlyArray<{ readonly id: string; readonly x: number; readonly y: number }>;
  readonly pipelines: ReadonlyArray<{ readonly points: ReadonlyArray<readonly [number, number]> }>;
  readonly scrap: ReadonlyArray<{ readonly x: number; readonly y: number }>;
  readonly wells: ReadonlyArray<{ readonly id: string; readonly x: number; readonly y: number; readonly casing: boolean; readonly permit: string; readonly permit_no: string }>;
}

export interface DayOptions extends DemoOptions {
  /** Changes the survey file before it is read. */
  readonly survey?: (survey: Record<string, unknown>) => Record<string, unknown>;
}

/** Makes the field day of a seed and runs it, without plan and report: they take no part in what is found. */
export async function runDay(seed: number, options: DayOptions = {}): Promise<RunDay> {
  const files = await demoFiles(seed, options.alter ? { alter: options.alter } : {});
  const given = JSON.parse(files['survey.json'] as string) as Record<string, unknown>;
  const text = JSON.stringify({ ...(options.survey ? options.survey(given) : given), plan: false, report: false });
  const truth = JSON.parse(files['truth/truth.json'] as string) as DayTruth;
  const host = memoryHost(files, (path) => {
    if (path.startsWith('truth/')) throw new Error(`the run read ${path}`);
  });
  const survey = readSurvey(text, 'survey.json', { operations: BUILT_IN_OPERATIONS, resolve: (path) => path });
  const result = await runSurvey(survey, { operations: BUILT_IN_OPERATIONS, host });
  const value = <T>(role: string): T => result.values.get(role) as T;
  return {
    result, truth, records: value('records'), readings: value('readings'), anomalies: value('anomalies'), detection: value('detection'), findings: value('findings'),
  };
}

/** The finding of the well that a word describes: the pulled one, the one that no permit tells of. */
export function findingOf(day: RunDay, recordId: string): Finding | undefined {
  return day.findings.list.find((finding) => finding.recordId === recordId);
}

/** Readings closer to any source than this belong to the source, not to the noise. */
const OWN_READINGS_M = 8;
const LOCAL_M = 30;
/** MAD to standard deviation of a Gaussian (Hampel 1974). */
const MAD_SCALE = 1.4826;

/** Robust sd of the residual within 30 m of a place, the sources' own readings left out; nT. */
export function localNoiseNT({ readings, truth }: RunDay, x: number, y: number): number {
  const points = [...truth.casings, ...truth.scrap];
  const values: number[] = [];
  for (let i = 0; i < readings.count; i++) {
    const [rx, ry, value] = [readings.x[i]!, readings.y[i]!, readings.residual[i]!];
    if (Number.isNaN(value) || Math.hypot(rx - x, ry - y) > LOCAL_M) continue;
    if (points.some((point) => Math.hypot(rx - point.x, ry - point.y) < OWN_READINGS_M)) continue;
    if (truth.pipelines.some(({ points: line }) => distanceTo(line, [rx, ry]) < OWN_READINGS_M)) continue;
    values.push(value);
  }
  const centre = middle(values);
  return MAD_SCALE * middle(values.map((value) => Math.abs(value - centre)));
}

/** Largest residual by magnitude within `radiusM` of a place, nT. */
export function peakNT({ readings }: RunDay, x: number, y: number, radiusM = 4): number {
  let peak = 0;
  for (let i = 0; i < readings.count; i++) {
    const value = Math.abs(readings.residual[i]!);
    if (value > peak && Math.hypot(readings.x[i]! - x, readings.y[i]! - y) <= radiusM) peak = value;
  }
  return peak;
}

function middle(values: readonly number[]): number {
  if (values.length === 0) return NaN;
  const sorted = values.toSorted((a, b) => a - b);
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half]! : (sorted[half - 1]! + sorted[half]!) / 2;
}
