import { UserError } from '../errors.js';
import { MAX_CELLS } from '../grid/gridFrame.js';
import { readParameters } from '../operations/readParameters.js';
import type { GridOutput, Operation } from '../operations/types.js';
import { inMemory } from '../raster/inMemory.js';
import { makeSite, type SiteSettings } from '../site/makeSite.js';
import { camelKeys } from '../operations/camelKeys.js';
import type { Site } from '../site/types.js';
import type { Host } from './host.js';
import { orderOperations } from './orderOperations.js';
import type { Survey } from './readSurvey.js';

/** What one operation did in a run. */
export interface StepTrace {
  readonly operation: Operation;
  /** Parameters as used, defaults filled in. */
  readonly parameters: Readonly<Record<string, unknown>>;
}

export interface RunResult {
  readonly survey: Survey;
  readonly site: Site;
  /** Every role's value: those given, and those made. */
  readonly values: ReadonlyMap<string, unknown>;
  readonly steps: readonly StepTrace[];
  readonly warnings: readonly string[];
  /** Operations that did not run, with the reason; `chosen` where the survey file left them out or did not ask for them. */
  readonly skipped: readonly { readonly id: string; readonly why: string; readonly chosen: boolean }[];
}

export interface RunOptions {
  readonly operations: readonly Operation[];
  readonly host: Host;
  /** Reads values that are there before the first operation, by role. */
  readonly given?: (site: Site) => Promise<ReadonlyMap<string, unknown>>;
  /** An operation that cannot run is an error instead of left out. */
  readonly strict?: boolean;
}

/** Runs the operations over a survey, each as soon as its inputs are made. Deterministic: same inputs, same result. */
export async function runSurvey(survey: Survey, { operations, host, given, strict = false }: RunOptions): Promise<RunResult> {
  const warnings: string[] = [];
  const warn = (message: string): void => {
    if (!warnings.includes(message)) warnings.push(message);
  };
  const steps: StepTrace[] = [];
  const skipped: { id: string; why: string; chosen: boolean }[] = [];
  host.progress('site');
  const site = await makeSite(camelKeys<SiteSettings>(survey.common), { files: host.files, where: survey.where, warn });
  const values = new Map(await given?.(site));
  for (const operation of orderOperations(operations)) {
    const why = whyNot(operation, survey, values);
    if (why !== null) {
      if (strict) throw new UserError({ code: 'input_missing', where: `ironplat ${operation.id}`, found: why.reason, wanted: 'everything that the operation needs' });
      skipped.push({ id: operation.id, why: why.reason, chosen: why.chosen });
      continue;
    }
    host.progress(operation.id);
    const parameters = readParameters(survey.sections[operation.id], operation.parameters, { where: `${survey.where}, ${operation.id}`, resolve: survey.resolve });
    const inputs = inputsOf(operation, values, warn);
    const outputs = await operation.run({
      site, parameters, inputs, files: host.files, seed: survey.seed, solveTile: host.solveTile,
      before: { warnings: [...warnings], operations: steps.map((step) => step.operation) },
      progress: (message) => host.progress(`${operation.id}: ${message}`),
      warn: (message) => warn(`${operation.id}: ${message}`),
    });
    for (const [role, slot] of Object.entries(operation.outputs)) {
      if (outputs[role] === undefined && slot.optional) continue;
      if (outputs[role] === undefined) throw new UserError({ code: 'operation_invalid', where: `operation "${operation.id}"`, found: `no output "${role}"`, wanted: 'every output that the operation declares' });
      values.set(role, outputs[role]);
    }
    steps.push({ operation, parameters });
  }
  return { survey, site, values, steps, warnings, skipped };
}

/**
 * What an operation starts from. A grid that is made as its rows are read is not for a second reader: an operation that
 * needs it stops the run, one that can do without goes without.
 */
function inputsOf(operation: Operation, values: ReadonlyMap<string, unknown>, warn: (message: string) => void): Record<string, unknown> {
  const inputs: Record<string, unknown> = {};
  for (const [role, slot] of Object.entries(operation.inputs)) {
    if (!values.has(role)) continue;
    const value = values.get(role);
    if (slot.form !== 'grid' || inMemory(value as GridOutput)) {
      inputs[role] = value;
      continue;
    }
    const { width, height } = value as GridOutput;
    const cells = `a grid of ${width} × ${height} cells`;
    if (!slot.optional) {
      throw new UserError({
        code: 'value_invalid', where: `ironplat ${operation.id}, ${role}`, found: cells, wanted: `one that fits into memory, at most ${MAX_CELLS / 1e6} million cells`,
        advice: `state a larger cell_m for it, look for readings with a wrong position, or leave the operation out with "${operation.id}": false`,
      });
    }
    warn(`${operation.id}: goes without "${role}" (${slot.title}), ${cells} that does not fit into memory; a larger cell_m would bring it in.`);
  }
  return inputs;
}

function whyNot(operation: Operation, survey: Survey, values: ReadonlyMap<string, unknown>): { reason: string; chosen: boolean } | null {
  const section = survey.sections[operation.id];
  if (section === false) return { reason: 'the survey file leaves it out', chosen: true };
  const keys = operation.parameters.required ?? [];
  if (section === undefined && keys.length > 0) return { reason: `no section "${operation.id}" with ${keys.join(', ')}`, chosen: true };
  const missing = Object.entries(operation.inputs).filter(([role, slot]) => !slot.optional && !values.has(role)).map(([role]) => role);
  return missing.length > 0 ? { reason: `no ${missing.join(', ')} to work on`, chosen: false } : null;
}
