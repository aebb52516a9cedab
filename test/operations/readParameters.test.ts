import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { objectSchema, pathSchema, publicSchema, quantitySchema, rangeSchema } from '../../src/operations/schema.js';
import { Ajv2020 } from 'ajv/dist/2020.js';

const SCHEMA = objectSchema({
  cell_m: quantitySchema('m', { exclusiveMinimum: 0, default: 2, description: 'Side of a cell.' }),
  depth_m: rangeSchema('m', { default: [0, 3] }),
  method: { type: 'string', enum: ['fast', 'slow'], default: 'fast' },
  file: pathSchema({ description: 'A file to read.' }),
  nested: objectSchema({ gap_s: quantitySchema('s', { default: 10 }) }, { default: {} }),
  list: { type: 'array', items: objectSchema({ path: pathSchema({}) }, { required: ['path'] }), default: [] },
}, { required: ['file'] });
const OPTIONS = { where: 'survey.json, grid', resolve: (path: string) => `/field/${path}` };

function complaint(given: unknown): { code: string; message: string } {
  try {
    readParameters(given, SCHEMA, OPTIONS);
  } catch (error) {
    if (error instanceof UserError) return { code: error.code, message: error.message };
    throw error;
  }
  throw new Error('nothing was refused');
}

describe('readParameters', () => {
  it('fills in defaults, settles units and resolves paths at every depth', () => {
    expect(readParameters({ file: 'a.csv', cell_m: '25 ft', depth_m: ['1 ft', 2], nested: { gap_s: '2 min' }, list: [{ path: 'b.csv' }] }, SCHEMA, OPTIONS)).toEqual({
      file: '/field/a.csv', cell_m: 25 * 0.3048, depth_m: [0.3048, 2], method: 'fast', nested: { gap_s: 120 }, list: [{ path: '/field/b.csv' }],
    });
    expect(readParameters({ file: 'a.csv' }, SCHEMA, OPTIONS)).toMatchObject({ cell_m: 2, depth_m: [0, 3], nested: { gap_s: 10 } });
  });

  it('takes land-survey units as US survey feet: 3 rods are 3 × 16.5 × 1200/3937 m (NIST Handbook 44, appendix C)', () => {
    expect(readParameters({ file: 'a', cell_m: '3 rods' }, SCHEMA, OPTIONS).cell_m).toBeCloseTo(3 * 16.5 * 1200 / 3937, 12);
  });

  it.each([
    [{}, 'key_missing', 'no "file", wanted A file to read.'],
    [{ file: 'a', cel_m: 1 }, 'key_invalid', 'did you mean "cell_m"?'],
    [{ file: 'a', cell_m: '25' }, 'quantity_invalid', 'survey.json, grid, cell_m: found "25"'],
    [{ file: 'a', cell_m: '25 furlongs' }, 'quantity_invalid', 'wanted a number in m'],
    [{ file: 'a', cell_m: 0 }, 'key_invalid', 'cell_m: found 0, wanted a number > 0'],
    [{ file: 'a', method: 'quick' }, 'key_invalid', 'wanted one of fast, slow'],
    [{ file: 'a', nested: { gap_s: null } }, 'quantity_invalid', 'nested.gap_s'],
    [{ file: 'a', list: [{}] }, 'key_missing', 'list[0]: found no "path"'],
    [{ file: 3 }, 'key_invalid', 'file: found 3, wanted a string'],
    [{ file: 'a', list: 'x' }, 'key_invalid', 'wanted an array'],
  ])('refuses %j with %s and one sentence', (given, code, part) => {
    const { code: seen, message } = complaint(given);
    expect(seen).toBe(code);
    expect(message).toContain(part);
    expect(message.startsWith('survey.json, grid')).toBe(true);
  });

  it('publishes a schema that takes what the reader takes, with the unit in words', () => {
    const validate = new Ajv2020({ strict: true, formats: { 'uri-reference': true } }).compile(publicSchema(SCHEMA));
    for (const good of [{ file: 'a' }, { file: 'a', cell_m: 2 }, { file: 'a', cell_m: '25 ft' }, { file: 'a', cell_m: '3 rods' }]) expect(validate(good), JSON.stringify(good)).toBe(true);
    for (const bad of [{}, { file: 'a', cell_m: '25' }, { file: 'a', cell_m: -1 }, { file: 'a', cell_m: '2 hours' }]) expect(validate(bad), JSON.stringify(bad)).toBe(false);
  });
});
