import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { COMMON_SCHEMA } from '../src/survey/commonSchema.js';
import { readParameters } from '../src/operations/readParameters.js';
import { readSurvey } from '../src/survey/readSurvey.js';
import * as ironplat from '../src/index.js';

const README = readFileSync(join(import.meta.dirname, '../README.md'), 'utf8');
const block = (language: string): string => new RegExp(`\`\`\`${language}\\n([\\s\\S]*?)\`\`\``).exec(README)![1]!;

describe('the README', () => {
  it('opens with the job in one paragraph', () => {
    const [title, first] = README.split('\n\n');
    expect(title).toBe('# Ironplat');
    expect(first!.split('\n').length).toBeGreaterThan(3);
    expect(first).toMatch(/permits.*readings.*findings/s);
  });

  it('shows a survey file that every operation takes', () => {
    const survey = readSurvey(block('json'), 'README.md', { operations: ironplat.BUILT_IN_OPERATIONS, resolve: (path) => path });
    expect(survey.common).toMatchObject({ crs: 'EPSG:2272', target: { depth_m: [0, 8 * 0.3048] } });
    for (const operation of ironplat.BUILT_IN_OPERATIONS) {
      const section = survey.sections[operation.id];
      if (section !== undefined) readParameters(section, operation.parameters, { where: operation.id, resolve: (path) => path });
    }
    expect(Object.keys(survey.sections)).toEqual(['locate', 'plan', 'reduce']);
    expect(COMMON_SCHEMA.required).toEqual(['crs', 'date', 'parcel']);
  });

  it('shows what the library prints: 39.3 N 80.2 W on NAD27 lies at 39.3000903 N on NAD83 (NADCON conus, by PROJ)', () => {
    expect(block('ts')).toContain("import { datumShift } from 'ironplat';");
    const place = ironplat.datumShift('NAD27', 'NAD83').place(-80.2, 39.3);
    expect(place.latDeg).toBeCloseTo(39.3000903, 7);
    expect(place).toMatchObject({ shift: 'NADCON conus', sdM: 0.15, sharedSdM: 0 });
  });

  it('names every command', () => {
    for (const { id } of ironplat.BUILT_IN_OPERATIONS) expect(README).toContain(`\`ironplat ${id}`);
    for (const id of ['run', 'simulate', 'check', 'describe']) expect(README).toContain(`\`ironplat ${id}`);
  });
});
