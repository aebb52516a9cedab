import { cpSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { run } from '../../cli/run.js';

export const DEMO_FOLDER = join(import.meta.dirname, '..', '..', 'fixtures', 'demo');
const FIELD_FILES = ['survey.json', 'permits.csv', 'base.csv', 'exclusions.geojson', 'parcel.shp', 'parcel.shx', 'parcel.dbf', 'parcel.prj', 'parcel.cpg'];

export interface Answer {
  readonly status: number;
  readonly out: string;
  readonly err: string;
}

/** Runs one command line in a folder and keeps what it says. */
export function ironplat(cwd: string, ...argv: string[]): Promise<Answer> {
  return ironplatWith({}, cwd, ...argv);
}

/** The same with an environment of its own. */
export async function ironplatWith(env: Readonly<Record<string, string>>, cwd: string, ...argv: string[]): Promise<Answer> {
  const said = { out: '', err: '' };
  const status = await run(argv, {
    cwd, env, watched: false,
    out: (text) => void (said.out += text),
    err: (text) => void (said.err += text),
  });
  return { status, ...said };
}

export function newFolder(): string {
  return mkdtempSync(join(tmpdir(), 'ironplat-test-'));
}

/** The demo's field files in a folder of their own; of the readings only each `every`-th line of the survey. */
export function demoFolder({ lines = (line: number): boolean => line > 0 }: { lines?: (line: number) => boolean } = {}): string {
  const folder = newFolder();
  for (const name of FIELD_FILES) cpSync(join(DEMO_FOLDER, name), join(folder, name));
  const [head, ...rows] = readFileSync(join(DEMO_FOLDER, 'readings.csv'), 'utf8').trimEnd().split('\n');
  const column = head!.split(',').indexOf('line');
  writeFileSync(join(folder, 'readings.csv'), `${[head, ...rows.filter((row) => lines(Number(row.split(',')[column])))].join('\n')}\n`);
  return folder;
}

export function edit(folder: string, name: string, change: (text: string) => string): void {
  const path = join(folder, name);
  mkdirSync(dirname(path), { recursive: true });
  writeFileSync(path, change(readFileSync(path, 'utf8')));
}

/** Changes the survey file as an object. */
export function editSurvey(folder: string, change: (survey: any) => void): void {
  edit(folder, 'survey.json', (text) => {
    const survey = JSON.parse(text) as unknown;
    change(survey);
    return JSON.stringify(survey);
  });
}

/** Every file below a folder with its content, by its path. */
export function contents(folder: string, below = ''): Map<string, Buffer> {
  const found = new Map<string, Buffer>();
  for (const name of readdirSync(join(folder, below)).toSorted()) {
    const path = join(below, name);
    if (statSync(join(folder, path)).isDirectory()) for (const [inner, bytes] of contents(folder, path)) found.set(inner, bytes);
    else found.set(path, readFileSync(join(folder, path)));
  }
  return found;
}
