import { UserError } from '../errors.js';
import { readParameters } from '../operations/readParameters.js';
import type { Operation } from '../operations/types.js';
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
    const inputs = Object.fromEntries(Object.keys(operation.inputs).filter((role) => values.has(role)).map((role) => [role, values.get(role)]));
    const outputs = await operation.run({
      site, parameters, inputs, files: host.files, seed: survey.seed,
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

function whyNot(operation: Operation, survey: Survey, values: ReadonlyMap<string, unknown>): { reason: string; chosen: boolean } | null {
  const section = survey.sections[operation.id];
  if (section === false) return { reason: 'the survey file leaves it out', chosen: true };
  const keys = operation.parameters.required ?? [];
  if (section === undefined && keys.length > 0) return { reason: `no section "${operation.id}" with ${keys.join(', ')}`, chosen: true };
  const missing = Object.entries(operation.inputs).filter(([role, slot]) => !slot.optional && !values.has(role)).map(([role]) => role);
  return missing.length > 0 ? { reason: `no ${missing.join(', ')} to work on`, chosen: false } : null;
}
