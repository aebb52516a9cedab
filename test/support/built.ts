import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Answer } from './cli.js';

const ROOT = join(import.meta.dirname, '..', '..');

/** The project as it is shipped, in a folder of its own: threads start from files that Node can run as they are. */
export function builtProject(): string {
  const folder = mkdtempSync(join(tmpdir(), 'ironplat-built-'));
  execFileSync(process.execPath, [join(ROOT, 'node_modules/typescript/bin/tsc'), '-p', join(ROOT, 'tsconfig.json'), '--outDir', folder], { stdio: 'inherit' });
  writeFileSync(join(folder, 'package.json'), '{ "type": "module" }');
  symlinkSync(join(ROOT, 'node_modules'), join(folder, 'node_modules'));
  return folder;
}

/** Runs one command line of the built project as a process of its own. */
export function runBuilt(built: string, cwd: string, ...argv: string[]): Answer {
  const { status, stdout, stderr } = spawnSync(process.execPath, [join(built, 'cli/main.js'), ...argv], { cwd, encoding: 'utf8' });
  return { status: status ?? -1, out: stdout, err: stderr };
}
