import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join, posix, sep } from 'node:path';

/** Floors from the ground up. Rooms on one floor do not see each other, except a stage another stage's `types.ts`. */
export const FLOORS: readonly (readonly string[])[] = [
  ['errors.ts'],
  ['units.ts', 'files.ts', 'nearest.ts', 'version.ts'],
  ['numerics'],
  ['geodesy', 'table'],
  ['vector', 'raster', 'field'],
  ['density'],
  ['detection'],
  ['site'],
  ['records', 'plan', 'readings', 'grid', 'anomalies', 'findings'],
  ['simulation'],
  ['report'],
  ['operations'],
  ['survey'],
  ['index.ts'],
];
const STAGES: readonly string[] = ['records', 'plan', 'readings', 'grid', 'anomalies', 'findings'];

/** Things that would tie `src` to one machine or make two runs differ. */
const FORBIDDEN: readonly (readonly [RegExp, string])[] = [
  [/from\s+['"]node:|import\(\s*['"]node:|\brequire\(/, 'imports a node: module'],
  [/\bconsole\s*\./, 'uses the console'],
  [/\bDate\.now\b|\bnew Date\(\s*\)|\bperformance\.now\b/, 'reads the clock'],
  [/\bMath\.random\b|\bcrypto\.getRandomValues\b/, 'draws unseeded random numbers'],
  [/\bprocess\.|\bBuffer\.|\bglobalThis\.process\b/, 'uses a global of Node'],
];

export function typescriptFiles(root: string, folder: string): string[] {
  return readdirSync(join(root, folder))
    .flatMap((name) => {
      const path = join(folder, name);
      return statSync(join(root, path)).isDirectory() ? typescriptFiles(root, path) : path.endsWith('.ts') ? [path] : [];
    })
    .map((path) => path.split(sep).join('/'));
}

/** What breaks the house rules in one file of `src`, as sentences; `path` is relative to the project, as in `src/grid/x.ts`. */
export function houseBreaches(path: string, text: string): string[] {
  const code = withoutComments(text);
  const breaches = FORBIDDEN.filter(([pattern]) => pattern.test(code)).map(([, what]) => `${path} ${what}`);
  const room = roomOf(path);
  const floor = floorOf(room);
  if (floor < 0) return [...breaches, `${path} stands in no room of the house`];
  for (const target of importsOf(code)) {
    if (!target.startsWith('.')) continue;
    const to = posix.normalize(posix.join(posix.dirname(path), target)).replace(/\.js$/, '.ts');
    if (!to.startsWith('src/')) {
      breaches.push(`${path} imports ${to} from outside src`);
      continue;
    }
    const other = roomOf(to);
    if (other === room) continue;
    const wordsOnly = to.endsWith('/types.ts') && STAGES.includes(other) && STAGES.includes(room);
    if (floorOf(other) >= floor && !wordsOnly) breaches.push(`${path} imports upwards or sideways: ${to}`);
  }
  return breaches;
}

export function readProjectFile(root: string, path: string): string {
  return readFileSync(join(root, path), 'utf8');
}


function importsOf(code: string): string[] {
  return [...code.matchAll(/(?:from|import)\s*\(?\s*['"]([^'"]+)['"]/g)].map((match) => match[1]!);
}

function withoutComments(text: string): string {
  return text.replace(/\/\*[\s\S]*?\*\//g, '').replace(/(^|[^:'"`])\/\/.*$/gm, '$1');
}

function roomOf(path: string): string {
  return path.split('/')[1]!;
}

function floorOf(room: string): number {
  return FLOORS.findIndex((rooms) => rooms.includes(room));
}
