import { Command, CommanderError } from 'commander';
import { UserError } from '../src/errors.js';
import { VERSION } from '../src/version.js';
import { checkCommand } from './commands/check.js';
import { describeCommand } from './commands/describe.js';
import { operationCommand } from './commands/operation.js';
import { runCommand } from './commands/run.js';
import { simulateCommand } from './commands/simulate.js';
import { loadOperations } from './loadOperations.js';
import type { Terminal } from './terminal.js';

const DONE = 0;
const MISUSE = 2;
/** A fault of ours, not of the data and not of the user (sysexits.h: EX_SOFTWARE). */
const FAULT = 70;

/** Runs one command line. Returns the exit status: 0 done, 1 the data failed, 2 misuse. */
export async function run(argv: readonly string[], terminal: Terminal): Promise<number> {
  try {
    const { operations, rest } = await loadOperations(argv, terminal.cwd);
    const program = new Command('ironplat')
      .description('From historic well permits and a magnetometer crew\'s readings to casings found, and to a stated chance for what was not.')
      .version(VERSION)
      .option('--operations <file>', 'a module with operations of your own; may be given more than once')
      .showHelpAfterError('(add --help for the flags and an example)')
      .exitOverride()
      .configureOutput({ writeOut: (text) => terminal.out(text), writeErr: (text) => terminal.err(text) });
    for (const command of [
      runCommand(operations, terminal),
      ...operations.map((operation) => operationCommand(operation, operations, terminal)),
      simulateCommand(terminal),
      checkCommand(operations, terminal),
      describeCommand(operations, terminal),
    ]) program.addCommand(command.copyInheritedSettings(program));
    if (rest.length === 0) {
      program.outputHelp({ error: true });
      return MISUSE;
    }
    await program.parseAsync(rest, { from: 'user' });
    return DONE;
  } catch (error) {
    return answer(error, terminal);
  }
}

function answer(error: unknown, terminal: Terminal): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? DONE : MISUSE;
  if (error instanceof UserError) {
    terminal.err(`ironplat: ${error.message}\n`);
    return error.exitCode;
  }
  terminal.err(`ironplat: this is a fault of ours, please report it: ${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`);
  return FAULT;
}
