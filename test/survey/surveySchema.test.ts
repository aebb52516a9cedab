import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Ajv2020 } from 'ajv/dist/2020.js';
import addFormats from 'ajv-formats';
import { describe, expect, it } from 'vitest';
import { BUILT_IN_OPERATIONS } from '../../src/operations/index.js';
import { publishedSurveySchema } from '../../src/survey/surveySchema.js';
import { DEMO_FOLDER } from '../support/cli.js';

const FILE = join(DEMO_FOLDER, 'survey.schema.json');
const SCHEMA = publishedSurveySchema(BUILT_IN_OPERATIONS);

function validator(): (value: unknown) => boolean {
  const ajv = new Ajv2020({ strict: true, strictTypes: false, strictRequired: false });
  addFormats.default(ajv);
  return ajv.compile(SCHEMA);
}

describe('the published schema of the survey file', () => {
  it('stands beside the demo, as the operations make it', () => {
    const text = `${JSON.stringify(SCHEMA, null, 2)}\n`;
    if (process.env.UPDATE_DEMO === '1') writeFileSync(FILE, text);
    expect(readFileSync(FILE, 'utf8')).toBe(text);
  });

  it('takes the demo, and quantities with units', () => {
    const demo = JSON.parse(readFileSync(join(DEMO_FOLDER, 'survey.json'), 'utf8')) as Record<string, unknown>;
    const validate = validator();
    expect(validate(demo)).toBe(true);
    expect(validate({ ...demo, grid: { cell_m: '3 ft' } })).toBe(true);
    expect(validate({ ...demo, plan: false })).toBe(true);
  });

  it.each([{ crs: 2272 }, { cell: 3 }, { grid: { cell_m: '3' } }, { grid: { cel_m: 3 } }, { date: 'yesterday' }, { plan: true }])('refuses %j', (change) => {
    const demo = JSON.parse(readFileSync(join(DEMO_FOLDER, 'survey.json'), 'utf8')) as Record<string, unknown>;
    expect(validator()({ ...demo, ...change })).toBe(false);
  });
});
