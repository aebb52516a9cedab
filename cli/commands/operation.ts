import { dirname, join, resolve } from 'node:path';
import { Command, Option } from 'commander';
import { UserError } from '../../src/errors.js';
import { camelKey } from '../../src/operations/camelKeys.js';
import type { Operation, Slot } from '../../src/operations/types.js';
import type { Site } from '../../src/site/types.js';
import { COMMON_SCHEMA } from '../../src/survey/commonSchema.js';
import { deliverRun } from '../../src/survey/deliverRun.js';
import { tracing, type Host } from '../../src/survey/host.js';
import { readStage, stagePath } from '../../src/survey/readStage.js';
import { surveyFrom, type Survey } from '../../src/survey/readSurvey.js';
import { runSurvey } from '../../src/survey/runSurvey.js';
import { flagsOf, valuesOf } from '../flags.js';
import { withNodeHost } from '../nodeHost.js';
import { withStandardGrids } from '../standardGrids.js';
import type { Terminal } from '../terminal.js';
import { writeFiles } from '../writeFiles.js';
import { FORMATS, formatsOf, JSON_FLAG, OUT, progressOn, QUIET, readJsonObject, seenFrom, shown, type OutputFlags } from './common.js';

/**
 * One operation on files. What the survey file says may be overruled by flags; inputs come from the folder that earlier
 * stages wrote into, or from a file that a flag names.
 */
export function operationCommand(operation: Operation, operations: readonly Operation[], terminal: Terminal): Command {
  const command = new Command(operation.id)
    .description(operation.summary)
    .option('--survey <file>', 'survey file; the flags below overrule it')
    .addOption(OUT);
  for (const [role, slot] of Object.entries(operation.inputs)) {
    command.addOption(new Option(`--from-${role.replaceAll('_', '-')} <file>`, `${slot.title} (default: as an earlier stage left it in the folder of --out)`));
  }
  const taken = new Set(command.options.map(({ long }) => long));
  for (const option of [...flagsOf(operation.parameters), ...flagsOf(COMMON_SCHEMA)]) {
    if (!taken.has(option.long)) command.addOption(option);
    taken.add(option.long);
  }
  return command.addOption(FORMATS).addOption(JSON_FLAG).addOption(QUIET)
    .addHelpText('after', `\nExample:\n  ${operation.example}${operation.sources.length > 0 ? `\n\nMethods:\n${operation.sources.map((source) => `  ${source}`).join('\n')}` : ''}`)
    .action(async (flags: OutputFlags & Record<string, unknown>) => {
      const formats = formatsOf(flags.formats);
      const progress = progressOn(terminal, flags.quiet);
      const out = resolve(terminal.cwd, flags.out);
      await withNodeHost(out, progress.show, async (node) => {
        const { host, inputs } = tracing(node);
        const survey = await withStandardGrids(await surveyOf(operation, operations, { flags, host, terminal }), terminal);
        const given = (site: Site): Promise<Map<string, unknown>> => readInputs(operation, { site, host, out, flags, terminal });
        const result = await runSurvey(survey, { operations: [operation], host, given, strict: true });
        const { files, warnings } = await deliverRun(result, { host, inputs: inputs(), formats, manifest: false, relative: seenFrom(dirname(survey.where)) });
        await writeFiles(out, files);
        progress.clear();
        for (const warning of warnings) terminal.err(`warning: ${warning}\n`);
        if (flags.quiet) return;
        const names = [...files.keys()].toSorted();
        terminal.out(flags.json
          ? `${JSON.stringify({ operation: operation.id, out: shown(out, terminal), warnings, files: names }, null, 2)}\n`
          : `${operation.id}: wrote ${names.join(', ')} in ${shown(out, terminal)}.\n`);
      });
    });
}

async function surveyOf(operation: Operation, operations: readonly Operation[], { flags, host, terminal }: { flags: Record<string, unknown>; host: Host; terminal: Terminal }): Promise<Survey> {
  const file = flags.survey === undefined ? null : resolve(terminal.cwd, String(flags.survey));
  const written = file === null ? {} : await readJsonObject(host, file, 'a survey file');
  const where = file ?? join(terminal.cwd, 'command line');
  const folder = dirname(where);
  // Paths of flags are seen from where the user stands, paths of the file from where it lies.
  const absolute = (values: Record<string, unknown>, keys: readonly string[]): Record<string, unknown> =>
    Object.fromEntries(Object.entries(values).map(([key, value]) => [key, keys.includes(key) ? fromHere(value, terminal) : value]));
  const common = absolute(valuesOf(COMMON_SCHEMA, flags), ['parcel', 'exclusions', 'grids']);
  const paths = Object.entries(operation.parameters.properties).filter(([, schema]) => schema['x-path'] || schema.items?.['x-path']).map(([key]) => key);
  const section = { ...(written[operation.id] as object | undefined), ...absolute(valuesOf(operation.parameters, flags), paths) };
  return surveyFrom({ ...written, ...common, [operation.id]: section }, where, { operations, resolve: (name) => host.resolve(name, folder) });
}

function fromHere(value: unknown, terminal: Terminal): unknown {
  return Array.isArray(value) ? value.map((item) => fromHere(item, terminal)) : typeof value === 'string' ? resolve(terminal.cwd, value) : value;
}

async function readInputs(operation: Operation, { site, host, out, flags, terminal }: {
  site: Site; host: Host; out: string; flags: Record<string, unknown>; terminal: Terminal;
}): Promise<Map<string, unknown>> {
  const given = new Map<string, unknown>();
  for (const [role, slot] of Object.entries(operation.inputs)) {
    const path = await pathOf(role, slot, { host, out, named: flags[camelKey(`from_${role}`)], terminal });
    if (path !== null) given.set(role, await readStage(role, path, { slot, site, host }));
  }
  return given;
}

async function pathOf(role: string, slot: Slot, { host, out, named, terminal }: { host: Host; out: string; named: unknown; terminal: Terminal }): Promise<string | null> {
  if (named !== undefined) return resolve(terminal.cwd, String(named));
  const path = join(out, stagePath(role, slot));
  if (await host.files.has(path)) return path;
  if (slot.optional) return null;
  throw new UserError({ code: 'input_missing', where: shown(path, terminal), found: 'no such file', wanted: slot.title, advice: `run the stage that makes "${role}" into the same folder first, or name the file with --from-${role.replaceAll('_', '-')}` });
}
