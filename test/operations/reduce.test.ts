import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { baseName } from '../../src/files.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { reduce } from '../../src/operations/reduce.js';
import type { Readings } from '../../src/readings/types.js';
import { makeSite } from '../../src/site/makeSite.js';

const FOLDER = join(import.meta.dirname, '../../fixtures/demo');

function demoSource(extra: Record<string, string> = {}) {
  return {
    async read(path: string): Promise<Uint8Array> {
      const text = extra[baseName(path)];
      return text === undefined ? new Uint8Array(await readFile(path)) : new TextEncoder().encode(text);
    },
    has: async (): Promise<boolean> => true,
  };
}

async function runDemo(change: Record<string, unknown> = {}, extra: Record<string, string> = {}) {
  const survey = JSON.parse(await readFile(join(FOLDER, 'survey.json'), 'utf8'));
  const resolve = (path: string): string => join(FOLDER, path);
  const files = demoSource(extra);
  const site = await makeSite({ ...survey, parcel: resolve(survey.parcel), exclusions: [], grids: [], target: undefined }, { files, where: 'survey.json', warn: () => undefined });
  const parameters = readParameters({ ...survey.reduce, ...change }, reduce.parameters, { where: 'survey.json, reduce', resolve });
  const warnings: string[] = [];
  const outputs = await reduce.run({ site, parameters, inputs: {}, files, seed: 1, warn: (message: string) => warnings.push(message), progress: () => undefined } as never);
  return { readings: outputs['readings'] as Readings, warnings };
}

describe('reduce', () => {
  it('takes the demo from its survey file to a residual', async () => {
    const { readings, warnings } = await runDemo();
    expect(readings.count).toBeGreaterThan(50_000);
    expect(readings.steps.map((step) => step.column)).toEqual(['clean_nt', 'base_nt', 'head_nt', 'main_nt', 'reg_nt']);
    expect([readings.positionSdM, readings.positionCorrelationS]).toEqual([0.3, 60]);
    expect(warnings.join()).toContain('gaps of the base log');
    expect(warnings).toHaveLength(1);
  });

  it('answers an empty file, and a file with a header alone', async () => {
    for (const text of ['', 'utc,lon,lat,nt,line,sensor_m\n']) {
      const error = await runDemo({}, { 'readings.csv': text }).catch((reason: unknown) => reason);
      expect(error).toBeInstanceOf(UserError);
      expect((error as UserError).code).toBe('file_empty');
      expect((error as UserError).message).toContain('readings.csv');
    }
  });

  it('refuses a key that it does not know', async () => {
    const error = await runDemo({ regional: 100 }).catch((reason: unknown) => reason);
    expect((error as UserError).code).toBe('key_invalid');
  });
});
