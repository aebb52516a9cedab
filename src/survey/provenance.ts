import { VERSION } from '../version.js';
import type { FileDigest, InputTrace } from './host.js';
import type { RunResult } from './runSurvey.js';

/** A delivered file with its hash, so that a folder can be checked against what was delivered. */
export interface OutputTrace extends FileDigest {
  readonly path: string;
}

export interface Provenance {
  readonly ironplat: string;
  readonly survey: string;
  readonly seed: number;
  readonly common: Readonly<Record<string, unknown>>;
  readonly steps: readonly { readonly operation: string; readonly version: string; readonly parameters: Readonly<Record<string, unknown>>; readonly sources: readonly string[] }[];
  readonly skipped: RunResult['skipped'];
  readonly warnings: readonly string[];
  readonly inputs: readonly InputTrace[];
  readonly outputs: readonly OutputTrace[];
}

/** What was done to what, with which versions and parameters. It names no clock and no machine: same inputs, same bytes. */
export function provenanceOf(result: RunResult, { inputs, outputs, relative }: {
  inputs: readonly InputTrace[]; outputs: readonly OutputTrace[]; relative(path: string): string;
}): Provenance {
  return {
    ironplat: VERSION,
    survey: relative(result.survey.where),
    seed: result.survey.seed,
    common: relativePaths(result.survey.common, inputs, relative),
    steps: result.steps.map(({ operation, parameters }) => ({
      operation: operation.id, version: operation.version, parameters: relativePaths(parameters, inputs, relative), sources: operation.sources,
    })),
    skipped: result.skipped,
    warnings: result.warnings,
    inputs: inputs.map((input) => ({ ...input, path: relative(input.path) })),
    outputs,
  };
}

/** Parameters name files as the survey file does, not as the machine does. */
function relativePaths(parameters: Readonly<Record<string, unknown>>, inputs: readonly InputTrace[], relative: (path: string) => string): Record<string, unknown> {
  const known = new Set(inputs.map(({ path }) => path));
  const walk = (value: unknown): unknown => {
    if (typeof value === 'string') return known.has(value) ? relative(value) : value;
    if (Array.isArray(value)) return value.map(walk);
    if (value === null || typeof value !== 'object') return value;
    return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, walk(inner)]));
  };
  return walk(parameters) as Record<string, unknown>;
}
