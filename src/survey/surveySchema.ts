import { publicSchema } from '../operations/schema.js';
import type { ObjectSchema, Operation, Schema } from '../operations/types.js';
import { COMMON_SCHEMA } from './commonSchema.js';

/** Schema of the survey file for reading: the common keys, and one section an operation. */
export function surveyFileSchema(operations: readonly Operation[]): ObjectSchema {
  const sections = operations.map((operation): [string, Schema] => [operation.id, { description: operation.summary }]);
  return { ...COMMON_SCHEMA, properties: { ...COMMON_SCHEMA.properties, ...Object.fromEntries(sections) } };
}

/** The survey file's published JSON Schema (2020-12), for editors and other programs. */
export function publishedSurveySchema(operations: readonly Operation[]): Record<string, unknown> {
  const common = publicSchema(COMMON_SCHEMA);
  const sections = operations.map((operation): [string, unknown] => [
    operation.id, { description: operation.summary, oneOf: [publicSchema(operation.parameters), { const: false, description: 'Leave this operation out.' }] },
  ]);
  return {
    $schema: 'https://json-schema.org/draft/2020-12/schema',
    title: 'Ironplat survey file',
    ...common,
    properties: { ...(common.properties as object), ...Object.fromEntries(sections) },
  };
}
