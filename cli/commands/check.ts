import { stat } from 'node:fs/promises';
import { dirname, join, resolve } from 'node:path';
import { Command } from 'commander';
import { UserError } from '../../src/errors.js';
import type { Operation } from '../../src/operations/types.js';
import { checkDelivery } from '../../src/survey/checkDelivery.js';
import { checkSurvey } from '../../src/survey/checkSurvey.js';
import { PROVENANCE } from '../../src/survey/deliverRun.js';
import { readSurvey } from '../../src/survey/readSurvey.js';
import { nodeHost } from '../nodeHost.js';
import { withStandardGrids } from '../standardGrids.js';
import type { Terminal } from '../terminal.js';
import { JSON_FLAG } from './common.js';

/** `ironplat check`: a survey file's inputs before anything runs, or a delivered folder against its provenance. */
export function checkCommand(operations: readonly Operation[], terminal: Terminal): Command {
  return new Command('check')
    .description('Checks a survey file and its inputs before anything runs, or a delivered folder against its provenance.')
    .argument('<path>', 'survey file, or folder that a run has written')
    .addOption(JSON_FLAG)
    .addHelpText('after', '\nExample:\n  ironplat check survey.json\n  ironplat check delivery')
    .action(async (name: string, flags: { json?: boolean }) => {
      const path = resolve(terminal.cwd, name);
      const host = nodeHost(() => undefined);
      const isFolder = (await stat(path).catch((error: NodeJS.ErrnoException) => {
        throw new UserError({ code: 'file_missing', where: name, found: error.code === 'ENOENT' ? 'nothing there' : error.message, wanted: 'a survey file or a delivered folder' });
      })).isDirectory();
      let lines: string[];
      if (isFolder) {
        lines = await checkDelivery(await host.files.read(join(path, PROVENANCE)), { where: join(name, PROVENANCE), host, resolve: (file) => join(path, file) });
      } else {
        const folder = dirname(path);
        const text = new TextDecoder().decode(await host.files.read(path));
        const survey = await withStandardGrids(readSurvey(text, path, { operations, resolve: (file) => host.resolve(file, folder) }), terminal);
        lines = await checkSurvey(survey, { operations, host });
      }
      terminal.out(flags.json ? `${JSON.stringify({ path: name, ok: true, checked: lines }, null, 2)}\n` : `${lines.join('\n')}\n`);
    });
}
