import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { houseBreaches, readProjectFile, typescriptFiles } from './support/house.js';

const ROOT = join(import.meta.dirname, '..');

describe('the house rules', () => {
  const files = typescriptFiles(ROOT, 'src');

  it('hold in every file of src', () => {
    expect(files.length).toBeGreaterThan(50);
    expect(files.flatMap((path) => houseBreaches(path, readProjectFile(ROOT, path)))).toEqual([]);
  });

  it.each([
    ['src/grid/x.ts', "import { readFileSync } from 'node:fs';", 'node: module'],
    ['src/grid/x.ts', 'console.log(1);', 'console'],
    ['src/grid/x.ts', 'const t = Date.now();', 'clock'],
    ['src/grid/x.ts', 'const r = Math.random();', 'random'],
    ['src/numerics/x.ts', "import { gridReadings } from '../grid/gridReadings.js';", 'upwards'],
    ['src/grid/x.ts', "import { reduceReadings } from '../readings/reduceReadings.js';", 'sideways'],
    ['src/grid/x.ts', "import { run } from '../../cli/run.js';", 'outside src'],
    ['src/attic/x.ts', '', 'no room'],
  ])('are seen to be broken: %s %s', (path, text, what) => {
    expect(houseBreaches(path, text).join()).toContain(what);
  });

  it('let a stage use the words of another stage, and comments say what they like', () => {
    expect(houseBreaches('src/grid/x.ts', "import type { Readings } from '../readings/types.js'; // Math.random()")).toEqual([]);
  });
});
