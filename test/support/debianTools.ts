import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** The interpreter that Debian's packages install their modules for; another one on the path would not see them. */
const PYTHON = '/usr/bin/python3';

export interface ToolRun {
  readonly status: number;
  readonly stdout: string;
  readonly stderr: string;
}

/** Whether a program is on the path. */
export function hasProgram(name: string): boolean {
  return spawnSync('which', [name]).status === 0;
}

/** Whether Debian's Python has a module, such as `osgeo` (package python3-gdal). */
export function hasPythonModule(name: string): boolean {
  return spawnSync(PYTHON, ['-c', `import ${name}`]).status === 0;
}

/** Runs a Python module's main on files that are written for it to a folder of their own; `{name}` in an argument stands for the file's path. */
export function runPython(args: readonly string[], files: Readonly<Record<string, Uint8Array>>): ToolRun {
  const folder = mkdtempSync(join(tmpdir(), 'ironplat-test-'));
  try {
    for (const [name, bytes] of Object.entries(files)) writeFileSync(join(folder, name), bytes);
    const resolved = args.map((arg) => arg.replace(/\{([^{}]+)\}/g, (whole, name: string) => (name in files ? join(folder, name) : whole)));
    const run = spawnSync(PYTHON, resolved, { cwd: folder, encoding: 'utf8' });
    return { status: run.status ?? -1, stdout: run.stdout, stderr: run.stderr };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

export const HAS_DEBIAN_GDAL = hasPythonModule('osgeo_utils.samples.validate_cloud_optimized_geotiff');

/** Debian's COG validator with its full check; empty stderr and status 0 mean that the file is valid. */
export function validateCogWithDebian(bytes: Uint8Array): ToolRun {
  return runPython(['-m', 'osgeo_utils.samples.validate_cloud_optimized_geotiff', '--full-check=yes', '{cog.tif}'], { 'cog.tif': bytes });
}
