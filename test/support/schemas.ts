import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { Ajv, type ErrorObject, type ValidateFunction } from 'ajv';
import formats from 'ajv-formats';

const FOLDER = join(import.meta.dirname, '../../fixtures/schemas');
const STAC_EXTENSIONS = 'https://stac-extensions.github.io';
/** Rules by the URL with which an item declares the extension. */
const EXTENSION_RULES: Readonly<Record<string, string>> = {
  [`${STAC_EXTENSIONS}/projection/v2.0.0/schema.json`]: 'rules/projection.json',
  [`${STAC_EXTENSIONS}/raster/v2.0.0/schema.json`]: 'rules/raster.json',
  [`${STAC_EXTENSIONS}/processing/v1.2.0/schema.json`]: 'rules/processing.json',
  [`${STAC_EXTENSIONS}/file/v2.1.0/schema.json`]: 'rules/file.json',
};
const GEOJSON = ['geojson/Feature.json', 'geojson/Geometry.json'] as const;

/** What is wrong with a STAC Item by STAC 1.1.0 and by every extension it declares; empty where nothing is. */
export function stacValidator(): (item: unknown) => string[] {
  const ajv = validatorOf(GEOJSON);
  const core = ajv.compile(readSchema('rules/stac-item.json'));
  const extensions = new Map(Object.entries(EXTENSION_RULES).map(([url, path]) => [url, ajv.compile(readSchema(path))]));
  return (item) => {
    const found = complaints(core, item, 'item');
    for (const url of declared(item)) {
      const check = extensions.get(url);
      found.push(...check ? complaints(check, item, EXTENSION_RULES[url]!) : [`no rules are known for the extension ${url}`]);
    }
    return [...found, ...undeclared(item)];
  };
}

/** What is wrong with a process description by OGC 18-062r2; empty where nothing is. */
export function processValidator(): (description: unknown) => string[] {
  const check = validatorOf([]).compile(readSchema('rules/process-description.json'));
  return (description) => complaints(check, description, 'description');
}

/** No schema is fetched: a `$ref` that is not among the files fails at once. */
function validatorOf(paths: readonly string[]): Ajv {
  const ajv = new Ajv({ allErrors: true, strictTypes: false, strictRequired: false });
  formats.default(ajv);
  for (const path of paths) ajv.addSchema(readSchema(path));
  return ajv;
}

function readSchema(path: string): Record<string, unknown> {
  return JSON.parse(readFileSync(join(FOLDER, path), 'utf8')) as Record<string, unknown>;
}

function complaints(check: ValidateFunction, value: unknown, name: string): string[] {
  return check(value) ? [] : check.errors!.map((error: ErrorObject) => `${name}${error.instancePath}: ${error.message} ${JSON.stringify(error.params)}`);
}

function declared(item: unknown): string[] {
  const list = (item as { stac_extensions?: unknown }).stac_extensions;
  return Array.isArray(list) ? list.filter((url): url is string => typeof url === 'string') : [];
}

/** A field with an extension's prefix means nothing where the extension is not declared. */
function undeclared(item: unknown): string[] {
  const names = new Set([...JSON.stringify(item).matchAll(/"(proj|raster|processing|file):[a-z0-9_]+":/g)].map(([, prefix]) => prefix!));
  const folders: Readonly<Record<string, string>> = { proj: 'projection', raster: 'raster', processing: 'processing', file: 'file' };
  return [...names].filter((prefix) => !declared(item).some((url) => url.startsWith(`${STAC_EXTENSIONS}/${folders[prefix]}/`)))
    .map((prefix) => `fields "${prefix}:…" stand in an item that does not declare the extension`);
}
