import { describe, expect, it } from 'vitest';
import { objectSchema } from '../../src/operations/schema.js';
import type { Operation } from '../../src/operations/types.js';
import { orderOperations } from '../../src/survey/orderOperations.js';
import { decodeValue, encodeValue } from '../../src/survey/valueJson.js';

function operation(id: string, inputs: string[], outputs: string[]): Operation {
  const slots = (roles: string[]): Operation['inputs'] => Object.fromEntries(roles.map((role) => [role, { title: role, form: 'json' as const }]));
  return { id, version: '1.0.0', title: id, summary: id, parameters: objectSchema({}), inputs: slots(inputs), outputs: slots(outputs), sources: [], example: id, run: async () => ({}) };
}

describe('orderOperations', () => {
  it('keeps the order of the list where it can, and makes inputs first where it must', () => {
    const list = [operation('report', ['a', 'own'], ['html']), operation('first', [], ['a']), operation('mine', ['a'], ['own'])];
    expect(orderOperations(list).map(({ id }) => id)).toEqual(['first', 'mine', 'report']);
    expect(orderOperations(list.slice(1)).map(({ id }) => id)).toEqual(['first', 'mine']);
  });

  it('refuses a ring and a role made twice', () => {
    expect(() => orderOperations([operation('p', ['b'], ['a']), operation('q', ['a'], ['b'])])).toThrow('depends on its own output');
    expect(() => orderOperations([operation('p', [], ['a']), operation('q', [], ['a'])])).toThrow('which "p" makes already');
  });
});

describe('values between stages', () => {
  it('come back exactly, with numbers that JSON does not know', () => {
    const value = { a: [0.1 + 0.2, NaN, Infinity, -Infinity, -0.5, 1e-300], b: { c: null, d: 'x', e: NaN } };
    expect(decodeValue(encodeValue(value))).toEqual(value);
  });
});
