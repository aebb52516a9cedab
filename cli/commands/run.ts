import { dirname, resolve } from 'node:path';
import { Command } from 'commander';
import type { Operation } from '../../src/operations/types.js';
import { deliverRun } from '../../src/survey/deliverRun.js';
import { tracing } from '../../src/survey/host.js';
import { readSurvey } from '../../src/survey/readSurvey.js';
import { runSurvey } from '../../src/survey/runSurvey.js';
import { summarise } from '../../src/survey/summarise.js';
import { withNodeHost } from '../nodeHost.js';
import { withStandardGrids } from '../standardGrids.js';
import type { Terminal } from '../terminal.js';
import { writeFiles } from '../writeFiles.js';
import { FORMATS, formatsOf, JSON_FLAG, OUT, progressOn, QUIET, seenFrom, shown, type OutputFlags } from './common.js';

/** `ironplat run SURVEY.json --out DIR`: every stage, from the records to the report. */
export function runCommand(operations: readonly Operation[], terminal: Terminal): Command {
  return new Command('run')
    .description('Runs every stage of a survey file and writes layers, grids, report, manifest and provenance.')
    .argument('<survey>', 'survey file (JSON)')
    .addOption(OUT).addOption(FORMATS).addOption(JSON_FLAG).addOption(QUIET)
    .addHelpText('after', '\nExample:\n  ironplat run survey.json --out delivery --formats gpkg,shp')
    .action(async (file: string, flags: OutputFlags) => {
      const formats = formatsOf(flags.formats);
      const progress = progressOn(terminal, flags.quiet);
      const out = resolve(terminal.cwd, flags.out);
      await withNodeHost(out, progress.show, async (node) => {
        const { host, inputs } = tracing(node);
        const path = resolve(terminal.cwd, file);
        const folder = dirname(path);
        const text = new TextDecoder().decode(await host.files.read(path));
        const survey = await withStandardGrids(readSurvey(text, path, { operations, resolve: (name) => host.resolve(name, folder) }), terminal);
        const result = await runSurvey(survey, { operations, host });
        const { files, warnings } = await deliverRun(result, { host, inputs: inputs(), formats, manifest: true, relative: seenFrom(folder) });
        progress.show('writing');
        await writeFiles(out, files);
        progress.clear();
        for (const warning of warnings) terminal.err(`warning: ${warning}\n`);
        if (flags.quiet) return;
        const summary = summarise({ ...result, warnings });
        terminal.out(flags.json
          ? `${JSON.stringify({ out: shown(out, terminal), ...summary, files: [...files.keys()].toSorted() }, null, 2)}\n`
          : `${summary.sentences.join('\n')}\n\nFiles in ${shown(out, terminal)}: report.html first, item.json lists the rest (${files.size} files).\n`);
      });
    });
}
