import { UserError } from '../errors.js';
import { publicSchema } from './schema.js';
import type { Operation, Slot } from './types.js';

/** Media types in which a slot's value is written; the first is the usual one. */
const MEDIA: Readonly<Record<Slot['form'], readonly string[]>> = {
  records: ['application/geo+json'],
  plan: ['application/geo+json', 'application/gpx+xml'],
  readings: ['text/csv'],
  grid: ['image/tiff; application=geotiff; profile=cloud-optimized'],
  layer: ['application/geo+json', 'application/vnd.flatgeobuf'],
  anomalies: ['application/geo+json'],
  findings: ['application/geo+json'],
  html: ['text/html'],
  json: ['application/json'],
};

/**
 * An operation as a process description of OGC API - Processes - Part 1 (OGC 18-062r2): its parameters and input
 * slots are the inputs, its output slots the outputs. Throws UserError `operation_invalid` where a parameter and an
 * input slot share a name.
 */
export function processDescription(operation: Operation): Record<string, unknown> {
  const twice = Object.keys(operation.inputs).find((role) => role in operation.parameters.properties);
  if (twice !== undefined) {
    throw new UserError({
      code: 'operation_invalid', where: `operation "${operation.id}"`, found: `"${twice}" both as a parameter and as an input`,
      wanted: 'names of their own: a process description lists both among its inputs',
    });
  }
  const required = new Set(operation.parameters.required ?? []);
  const parameters = Object.entries(operation.parameters.properties).map(([key, schema]) => [key, {
    title: schema.title ?? key.replaceAll('_', ' '),
    ...(schema.description ? { description: schema.description } : {}),
    minOccurs: required.has(key) ? 1 : 0,
    maxOccurs: 1,
    schema: openApi(publicSchema(schema)),
  }]);
  const slots = Object.entries(operation.inputs).map(([role, slot]) => [role, {
    title: slot.title, minOccurs: slot.optional ? 0 : 1, maxOccurs: 1, schema: slotSchema(slot),
  }]);
  return {
    id: operation.id,
    version: operation.version,
    title: operation.title,
    description: operation.summary,
    keywords: ['ironplat'],
    metadata: operation.sources.map((title) => ({ title, role: 'source' })),
    jobControlOptions: ['sync-execute'],
    outputTransmission: ['value'],
    inputs: Object.fromEntries([...slots, ...parameters]),
    outputs: Object.fromEntries(Object.entries(operation.outputs).map(([role, slot]) => [role, { title: slot.title, schema: slotSchema(slot) }])),
  };
}

function slotSchema(slot: Slot): Record<string, unknown> {
  const forms = MEDIA[slot.form].map((contentMediaType) => ({ type: 'string', contentMediaType }));
  return forms.length === 1 ? forms[0]! : { oneOf: forms };
}

/**
 * The schema dialect of OGC 18-062r2 is that of OpenAPI 3.0: no `examples`, and exclusive bounds are
 * flags beside the bound.
 */
function openApi(schema: unknown): unknown {
  if (Array.isArray(schema)) return schema.map(openApi);
  if (schema === null || typeof schema !== 'object') return schema;
  const { examples, exclusiveMinimum, exclusiveMaximum, properties, ...rest } = schema as Record<string, unknown>;
  const out: Record<string, unknown> = Object.fromEntries(Object.entries(rest).map(([key, value]) => [key, key === 'default' || key === 'enum' ? value : openApi(value)]));
  if (Array.isArray(examples) && examples.length > 0) out.example = examples[0];
  // With both bounds given the tighter one holds; there is one place for it.
  if (typeof exclusiveMinimum === 'number' && !(Number(out.minimum) > exclusiveMinimum)) Object.assign(out, { minimum: exclusiveMinimum, exclusiveMinimum: true });
  if (typeof exclusiveMaximum === 'number' && !(Number(out.maximum) < exclusiveMaximum)) Object.assign(out, { maximum: exclusiveMaximum, exclusiveMaximum: true });
  if (properties) out.properties = Object.fromEntries(Object.entries(properties).map(([key, value]) => [key, openApi(value)]));
  return out;
}
