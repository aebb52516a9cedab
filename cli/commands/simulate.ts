import { resolve } from 'node:path';
import { Command } from 'commander';
import { UserError } from '../../src/errors.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { SCENARIO_SCHEMA } from '../../src/simulation/scenarioSchema.js';
import { simulateFieldDay } from '../../src/simulation/simulateFieldDay.js';
import type { Scenario } from '../../src/simulation/types.js';
import { nodeHost } from '../nodeHost.js';
import type { Terminal } from '../terminal.js';
import { writeFiles } from '../writeFiles.js';
import { JSON_FLAG, OUT, QUIET, readJsonObject, shown, type OutputFlags } from './common.js';

/** `ironplat simulate`: a made field day over given sources, to try a plan or to test the whole chain. */
export function simulateCommand(terminal: Terminal): Command {
  return new Command('simulate')
    .description('Makes a field day: walks lines over the casings, pipes and scrap of a scenario file and writes readings, base log and truth.')
    .argument('<scenario>', 'scenario file (JSON)')
    .option('--seed <integer>', 'another seed than the scenario file has')
    .addOption(OUT).addOption(JSON_FLAG).addOption(QUIET)
    .addHelpText('after', '\nExample:\n  ironplat simulate scenario.json --out made --seed 7')
    .action(async (file: string, flags: OutputFlags & { seed?: string }) => {
      const host = nodeHost(() => undefined);
      const given = await readJsonObject(host, resolve(terminal.cwd, file), 'a scenario');
      if (flags.seed !== undefined) Object.assign(given, { seed: seedOf(flags.seed) });
      const scenario = readParameters(given, SCENARIO_SCHEMA, { where: file, resolve: (path) => path }) as unknown as Scenario;
      const day = simulateFieldDay(scenario);
      const truth = new TextEncoder().encode(`${JSON.stringify(day.truth, null, 2)}\n`);
      const files = new Map([['readings.csv', day.readings], ['base.csv', day.base], ['truth/truth.json', truth]]);
      const out = resolve(terminal.cwd, flags.out);
      await writeFiles(out, files);
      if (flags.quiet) return;
      const { casings, pipelines, scrap } = day.truth;
      terminal.out(flags.json
        ? `${JSON.stringify({ out: shown(out, terminal), readings: day.fieldNT.length, seed: scenario.seed, files: [...files.keys()] }, null, 2)}\n`
        : `Made ${day.fieldNT.length} readings over ${casings.length} casings, ${pipelines.length} pipelines and ${scrap.length} pieces of scrap (seed ${scenario.seed}) in ${shown(out, terminal)}.\n`);
    });
}

function seedOf(text: string): number {
  if (!/^\d+$/.test(text)) throw new UserError({ code: 'usage', where: '--seed', found: text, wanted: 'a whole number from 0' });
  return Number(text);
}
