import { Command, Option } from 'commander';
import { UserError } from '../../src/errors.js';
import { nearest } from '../../src/nearest.js';
import { processDescription } from '../../src/operations/processDescription.js';
import { publicSchema } from '../../src/operations/schema.js';
import type { Operation } from '../../src/operations/types.js';
import { publishedSurveySchema } from '../../src/survey/surveySchema.js';
import type { Terminal } from '../terminal.js';

/** `ironplat describe`: operations and schemas, for people and for programs. */
export function describeCommand(operations: readonly Operation[], terminal: Terminal): Command {
  return new Command('describe')
    .description('Describes the operations: what they take, what they make, which methods they rest on.')
    .argument('[operation]', 'one operation; all of them where none is named')
    .addOption(new Option('--schema', 'the JSON Schema of the survey file').conflicts('process'))
    .addOption(new Option('--process', 'as OGC API - Processes process descriptions (OGC 18-062r2)'))
    .addOption(new Option('--json', 'as JSON'))
    .addHelpText('after', '\nExample:\n  ironplat describe --schema > survey.schema.json')
    .action((id: string | undefined, flags: { schema?: boolean; process?: boolean; json?: boolean }) => {
      if (flags.schema) return print(terminal, publishedSurveySchema(operations));
      const chosen = id === undefined ? operations : [find(id, operations)];
      if (flags.process) return print(terminal, id === undefined ? chosen.map(processDescription) : processDescription(chosen[0]!));
      if (flags.json) return print(terminal, chosen.map(plain));
      return terminal.out(`${chosen.map(inWords).join('\n\n')}\n`);
    });
}

function print(terminal: Terminal, value: unknown): void {
  terminal.out(`${JSON.stringify(value, null, 2)}\n`);
}

function find(id: string, operations: readonly Operation[]): Operation {
  const found = operations.find((operation) => operation.id === id);
  if (found) return found;
  const close = nearest(id, operations.map((operation) => operation.id));
  throw new UserError({
    code: 'usage', where: 'ironplat describe', found: `"${id}"`, wanted: `one of ${operations.map((operation) => operation.id).join(', ')}`,
    ...(close ? { advice: `did you mean "${close}"?` } : {}),
  });
}

function plain(operation: Operation): Record<string, unknown> {
  const { id, version, title, summary, parameters, inputs, outputs, sources, example } = operation;
  return { id, version, title, summary, parameters: publicSchema(parameters), inputs, outputs, sources, example };
}

function inWords({ id, version, title, summary, parameters, inputs, outputs, sources, example }: Operation): string {
  const list = (head: string, lines: readonly string[]): string[] => (lines.length > 0 ? [`  ${head}`, ...lines.map((line) => `    ${line}`)] : []);
  return [
    `${id} ${version}: ${title}`,
    `  ${summary}`,
    ...list('takes', Object.entries(inputs).map(([role, slot]) => `${role}: ${slot.title}${slot.optional ? ' (optional)' : ''}`)),
    ...list('makes', Object.entries(outputs).map(([role, slot]) => `${role}: ${slot.title}`)),
    ...list('parameters', Object.entries(parameters.properties).map(([key, schema]) =>
      `${key}: ${schema.description ?? schema.title ?? ''}${schema.default === undefined ? '' : ` (default ${JSON.stringify(schema.default)})`}`)),
    ...list('rests on', sources),
    ...list('example', [example]),
  ].join('\n');
}
