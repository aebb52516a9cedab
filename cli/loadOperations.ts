import { resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { UserError } from '../src/errors.js';
import { checkOperation } from '../src/operations/checkOperation.js';
import { BUILT_IN_OPERATIONS } from '../src/operations/index.js';
import type { Operation } from '../src/operations/types.js';

const FLAG = '--operations';

/**
 * The built-in operations and those of modules named by `--operations FILE` (may be given more than once). A module
 * exports its operations as the default: one of them, or a list. The flags are taken off the arguments.
 */
export async function loadOperations(argv: readonly string[], cwd: string): Promise<{ operations: Operation[]; rest: string[]; modules: string[] }> {
  const rest: string[] = [];
  const modules: string[] = [];
  for (let i = 0; i < argv.length; i++) {
    const word = argv[i]!;
    if (word === FLAG) {
      const file = argv[++i];
      if (file === undefined || file.startsWith('--')) throw new UserError({ code: 'usage', where: FLAG, found: 'no file', wanted: 'a module that exports operations' });
      modules.push(file);
    } else if (word.startsWith(`${FLAG}=`)) modules.push(word.slice(FLAG.length + 1));
    else rest.push(word);
  }
  const operations = [...BUILT_IN_OPERATIONS];
  for (const file of modules) {
    for (const operation of await fromModule(resolve(cwd, file), file)) {
      if (operations.some(({ id }) => id === operation.id)) {
        throw new UserError({ code: 'operation_invalid', where: file, found: `the id "${operation.id}", which is taken`, wanted: 'an id of its own' });
      }
      operations.push(operation);
    }
  }
  return { operations, rest, modules };
}

async function fromModule(path: string, file: string): Promise<Operation[]> {
  let module: { default?: unknown };
  try {
    module = (await import(pathToFileURL(path).href)) as { default?: unknown };
  } catch (error) {
    throw new UserError({ code: 'file_unreadable', where: file, found: (error as Error).message, wanted: 'a module that Node can import' });
  }
  const exported = module.default;
  if (exported === undefined) throw new UserError({ code: 'operation_invalid', where: file, found: 'no default export', wanted: 'an operation or a list of them as the default export' });
  return (Array.isArray(exported) ? exported : [exported]).map((value) => checkOperation(value, file));
}
