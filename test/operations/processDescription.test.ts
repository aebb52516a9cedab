import { describe, expect, it } from 'vitest';
import { BUILT_IN_OPERATIONS } from '../../src/operations/index.js';
import { processDescription } from '../../src/operations/processDescription.js';
import { objectSchema, pathSchema, quantitySchema, rangeSchema } from '../../src/operations/schema.js';
import type { Operation } from '../../src/operations/types.js';
import { processValidator } from '../support/schemas.js';

const validate = processValidator();

/** Everything that a parameter may be, some of it two levels down. */
const OWN: Operation = {
  id: 'upward', version: '0.3.1', title: 'Upward continuation', summary: 'The field as it would be higher up.', example: 'ironplat upward survey.json',
  parameters: objectSchema({
    up_m: quantitySchema('m', { exclusiveMinimum: 0, exclusiveMaximum: 500, default: 10, examples: [5, 20], title: 'Height', description: 'How far up.' }),
    depths_m: rangeSchema('m', { default: [0, 3] }),
    share: { type: 'number', exclusiveMinimum: 0, maximum: 1 },
    count: { type: 'integer', minimum: 1, default: 4 },
    method: { type: 'string', enum: ['fast', 'exact'], default: 'fast' },
    quiet: { type: 'boolean', default: false },
    source: pathSchema({ description: 'A grid.' }),
    name: { type: 'string', pattern: '^[a-z]+$', minLength: 2 },
    window: objectSchema({
      // Keys that are keywords of JSON Schema as well.
      examples: { type: 'string', examples: ['a'] },
      default: { type: 'number', exclusiveMaximum: 3 },
      gaps_s: { type: 'array', items: quantitySchema('s', { exclusiveMinimum: 0 }), minItems: 1, maxItems: 9, default: [10] },
    }, { required: ['default'], default: { default: 1 } }),
    weights: { type: 'object', additionalProperties: { type: 'number', exclusiveMinimum: 0 } },
    files: { type: 'array', items: objectSchema({ path: pathSchema({}), shift_m: quantitySchema('m', { minimum: -5 }) }, { required: ['path'] }), default: [] },
  }, { required: ['source'] }),
  inputs: { residual: { title: 'Field', form: 'grid', unit: 'nT' }, plan: { title: 'Plan', form: 'plan', optional: true } },
  outputs: { upward: { title: 'Field higher up', form: 'grid', unit: 'nT' }, layer: { title: 'Outline', form: 'layer' }, page: { title: 'Page', form: 'html' } },
  sources: ['Blakely, Potential Theory in Gravity and Magnetic Applications (1995), 12.1'],
  run: () => Promise.resolve({}),
};

type Description = { inputs: Record<string, { schema: Record<string, unknown>; minOccurs: number; maxOccurs: number }>; outputs: Record<string, { schema: Record<string, unknown> }> };
const described = (operation: Operation): Description => processDescription(operation) as unknown as Description;

describe('processDescription', () => {
  it.each(BUILT_IN_OPERATIONS.map((operation) => [operation.id, operation] as const))('of %s is valid by OGC 18-062r2', (_, operation) => {
    expect(validate(processDescription(operation))).toEqual([]);
    const { inputs, outputs } = described(operation);
    expect(Object.keys(inputs).toSorted()).toEqual([...Object.keys(operation.inputs), ...Object.keys(operation.parameters.properties)].toSorted());
    expect(Object.keys(outputs)).toEqual(Object.keys(operation.outputs));
  });

  it('of a caller\'s own operation is valid, as it is written and read back', () => {
    expect(validate(processDescription(OWN))).toEqual([]);
    expect(validate(JSON.parse(JSON.stringify(processDescription(OWN))))).toEqual([]);
  });

  it('says exclusive bounds as flags beside the bound, at every depth, and examples as one example', () => {
    const { inputs } = described(OWN);
    expect(inputs.up_m!.schema).toMatchObject({ default: 10, example: 5, oneOf: [{ type: 'number', minimum: 0, exclusiveMinimum: true, maximum: 500, exclusiveMaximum: true }, { type: 'string' }] });
    expect(inputs.share!.schema).toMatchObject({ minimum: 0, exclusiveMinimum: true, maximum: 1 });
    expect(inputs.weights!.schema.additionalProperties).toEqual({ type: 'number', minimum: 0, exclusiveMinimum: true });
    const window = inputs.window!.schema.properties as Record<string, Record<string, unknown>>;
    expect(window.gaps_s!.items).toMatchObject({ oneOf: [{ minimum: 0, exclusiveMinimum: true }, { type: 'string' }] });
    expect(window.default).toEqual({ type: 'number', maximum: 3, exclusiveMaximum: true });
    expect(window.examples).toEqual({ type: 'string', example: 'a' });
  });

  it('leaves defaults as they are, though their keys look like keywords', () => {
    const odd: Operation = { ...OWN, parameters: objectSchema({ pair: { type: 'object', default: { exclusiveMinimum: 2, examples: ['x'] }, enum: [{ exclusiveMaximum: 1 }] } }) };
    expect(validate(processDescription(odd))).toEqual([]);
    expect(described(odd).inputs.pair!.schema).toMatchObject({ default: { exclusiveMinimum: 2, examples: ['x'] }, enum: [{ exclusiveMaximum: 1 }] });
  });

  it('of a bound and an exclusive bound together says the tighter one', () => {
    const both = (schema: object): Record<string, unknown> => described({ ...OWN, parameters: objectSchema({ a: { type: 'number', ...schema } }) }).inputs.a!.schema;
    expect(both({ minimum: 2, exclusiveMinimum: 0 })).toEqual({ type: 'number', minimum: 2 });
    expect(both({ minimum: 0, exclusiveMinimum: 2 })).toEqual({ type: 'number', minimum: 2, exclusiveMinimum: true });
    expect(both({ minimum: 2, exclusiveMinimum: 2 })).toEqual({ type: 'number', minimum: 2, exclusiveMinimum: true });
    expect(both({ maximum: 2, exclusiveMaximum: 3 })).toEqual({ type: 'number', maximum: 2 });
  });

  it('says what must be given: required parameters and inputs that are not optional', () => {
    const { inputs } = described(OWN);
    expect(Object.entries(inputs).filter(([, { minOccurs }]) => minOccurs === 1).map(([key]) => key)).toEqual(['residual', 'source']);
    expect(Object.values(inputs).every(({ maxOccurs }) => maxOccurs === 1)).toBe(true);
  });

  it('refuses a parameter that has the name of an input: one would hide the other', () => {
    expect(() => processDescription({ ...OWN, inputs: { share: { title: 'Share', form: 'grid' } } })).toThrow(/share/);
  });
});
