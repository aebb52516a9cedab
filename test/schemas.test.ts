import { describe, expect, it } from 'vitest';
import { processValidator, stacValidator } from './support/schemas.js';

type Json = Record<string, unknown>;

/** A copy with the value at a path of keys replaced, or taken away. */
function changed(value: Json, path: readonly string[], to: unknown): Json {
  const copy = structuredClone(value);
  let at: Json = copy;
  for (const key of path.slice(0, -1)) at = at[key] as Json;
  if (to === undefined) delete at[path.at(-1)!];
  else at[path.at(-1)!] = to;
  return copy;
}

const EXTENSION = 'https://stac-extensions.github.io';
const ITEM: Json = {
  type: 'Feature',
  stac_version: '1.1.0',
  stac_extensions: [`${EXTENSION}/projection/v2.0.0/schema.json`, `${EXTENSION}/raster/v2.0.0/schema.json`, `${EXTENSION}/processing/v1.2.0/schema.json`, `${EXTENSION}/file/v2.1.0/schema.json`],
  id: 'alder-hollow-2026',
  bbox: [-80.2, 39.3, -80.1, 39.4],
  geometry: { type: 'Polygon', coordinates: [[[-80.2, 39.3], [-80.1, 39.3], [-80.1, 39.4], [-80.2, 39.4], [-80.2, 39.3]]] },
  properties: {
    title: 'Alder Hollow', datetime: null, start_datetime: '2026-04-14T13:00:00Z', end_datetime: '2026-04-15T17:30:00Z',
    'proj:code': 'EPSG:26917', 'processing:software': { made: '1.0.0' },
  },
  links: [],
  assets: {
    residual: {
      href: './residual.tif', type: 'image/tiff', roles: ['data'], 'proj:shape': [20, 30], 'proj:transform': [2, 0, 500_000, 0, -2, 4_300_000],
      bands: [{ data_type: 'float32', nodata: 'nan', unit: 'nT', statistics: { minimum: -12.5, maximum: 340 }, 'raster:sampling': 'area' }],
      'file:size': 1024, 'file:checksum': `1220${'0f'.repeat(32)}`,
    },
  },
};

describe('the STAC validator', () => {
  const validate = stacValidator();
  const asset = ['assets', 'residual'] as const;

  it('accepts an item with four extensions, and one with none and no place', () => {
    expect(validate(ITEM)).toEqual([]);
    const { stac_extensions: _, bbox: __, ...rest } = ITEM;
    expect(validate({ ...rest, geometry: null, properties: { datetime: '2026-04-14T00:00:00Z' }, assets: {} })).toEqual([]);
  });

  it.each<[string, readonly string[], unknown]>([
    ['another STAC version', ['stac_version'], '1.0.0'],
    ['an empty identifier', ['id'], ''],
    ['a geometry without its box', ['bbox'], undefined],
    ['a box of five numbers', ['bbox'], [1, 2, 3, 4, 5]],
    ['a geometry of no known type', ['geometry'], { type: 'Circle', coordinates: [0, 0] }],
    ['a ring of three places', ['geometry', 'coordinates'], [[[0, 0], [1, 0], [0, 0]]]],
    ['no time', ['properties', 'datetime'], undefined],
    ['no end where there is no single time', ['properties', 'end_datetime'], undefined],
    ['a local time', ['properties', 'start_datetime'], '2026-04-14T09:00:00-04:00'],
    ['a day for a time', ['properties', 'start_datetime'], '2026-04-14'],
    ['no links', ['links'], undefined],
    ['a collection that no link leads to', ['collection'], 'surveys'],
    ['an asset without a place', [...asset, 'href'], undefined],
    ['a role that is no text', [...asset, 'roles'], [1]],
    ['a data type of its own', [...asset, 'bands'], [{ data_type: 'real', 'raster:sampling': 'area' }]],
    ['a NaN spelt otherwise', [...asset, 'bands'], [{ nodata: 'NaN', 'raster:sampling': 'area' }]],
    ['empty statistics', [...asset, 'bands'], [{ statistics: {}, 'raster:sampling': 'area' }]],
    ['an EPSG number in place of a code', ['properties', 'proj:code'], 26917],
    ['a field that projection 2 dropped', ['properties', 'proj:epsg'], 26917],
    ['a shape of one number', [...asset, 'proj:shape'], [20]],
    ['a transform of eight numbers', [...asset, 'proj:transform'], [1, 0, 0, 0, 1, 0, 0, 0]],
    ['raster declared and no raster field', [...asset, 'bands'], [{ data_type: 'float32' }]],
    ['a sampling of its own', [...asset, 'bands'], [{ 'raster:sampling': 'cell' }]],
    ['a version that is a number', ['properties', 'processing:software'], { made: 1 }],
    ['processing declared and no processing field', ['properties', 'processing:software'], undefined],
    ['a checksum in capitals', [...asset, 'file:checksum'], `1220${'0F'.repeat(32)}`],
    ['a SHA-256 cut short', [...asset, 'file:checksum'], '12200f0f'],
    ['a negative size', [...asset, 'file:size'], -1],
    ['an extension without rules', ['stac_extensions'], [...(ITEM.stac_extensions as string[]), `${EXTENSION}/view/v1.0.0/schema.json`]],
    ['another version of an extension', ['stac_extensions'], [`${EXTENSION}/projection/v1.0.0/schema.json`, ...(ITEM.stac_extensions as string[]).slice(1)]],
    ['fields of an extension that is not declared', ['stac_extensions'], (ITEM.stac_extensions as string[]).slice(1)],
  ])('refuses %s', (_, path, to) => {
    expect(validate(changed(ITEM, path, to))).not.toEqual([]);
  });
});

const DESCRIPTION: Json = {
  id: 'smooth', version: '1.0.0', title: 'Smooth', description: 'Smooths a grid.', keywords: ['grid'],
  metadata: [{ title: 'A paper', role: 'source', href: 'https://example.org/paper' }],
  jobControlOptions: ['sync-execute', 'async-execute'], outputTransmission: ['value', 'reference'],
  links: [{ href: 'https://example.org/processes/smooth/execution', rel: 'http://www.opengis.net/def/rel/ogc/1.0/execute', title: 'Run it' }],
  inputs: {
    grid: { title: 'Grid', minOccurs: 1, maxOccurs: 'unbounded', schema: { type: 'string', contentEncoding: 'binary', contentMediaType: 'image/tiff; application=geotiff' } },
    width: { schema: { type: 'number', minimum: 0, exclusiveMinimum: true, default: 2, example: 4 } },
    window: {
      schema: {
        type: 'object', required: ['rows'], additionalProperties: false,
        properties: { rows: { type: 'integer', minimum: 1 }, weights: { type: 'array', items: { type: 'number' }, minItems: 2, nullable: true } },
      },
    },
    place: { schema: { oneOf: [{ $ref: 'https://geojson.org/schema/Point.json' }, { type: 'string', format: 'uri' }] } },
  },
  outputs: { grid: { title: 'Smoothed', schema: { $ref: 'https://example.org/grid.json' } } },
};

describe('the process description validator', () => {
  const validate = processValidator();
  const width = ['inputs', 'width', 'schema'] as const;

  it('accepts a description with every kind of schema, and the shortest one', () => {
    expect(validate(DESCRIPTION)).toEqual([]);
    expect(validate({ id: 'nothing', version: '0.1' })).toEqual([]);
  });

  it.each<[string, readonly string[], unknown]>([
    ['no identifier', ['id'], undefined],
    ['no version', ['version'], undefined],
    ['keywords in one text', ['keywords'], 'grid, smooth'],
    ['an unknown way to run', ['jobControlOptions'], ['sync']],
    ['an unknown way to hand over', ['outputTransmission'], ['file']],
    ['a link that leads nowhere', ['links'], [{ rel: 'self' }]],
    ['inputs in a list', ['inputs'], [{ id: 'grid', schema: { type: 'string' } }]],
    ['an input without a schema', width, undefined],
    ['an output without a schema', ['outputs', 'grid'], { title: 'Smoothed' }],
    ['a count in words', ['inputs', 'grid', 'maxOccurs'], 'many'],
    ['an exclusive bound as a number', [...width, 'exclusiveMinimum'], 0],
    ['a flag without its bound', [...width, 'minimum'], undefined],
    ['two types at once', [...width, 'type'], ['number', 'null']],
    ['a const', [...width, 'const'], 2],
    ['examples in a list', [...width, 'examples'], [4]],
    ['a keyword of its own', [...width, 'x-unit'], 'm'],
    ['a broken pattern', [...width, 'pattern'], '('],
    ['a keyword of its own far inside', ['inputs', 'window', 'schema', 'properties', 'weights', 'items'], { type: 'number', 'x-unit': 'm' }],
    ['an array of who knows what', ['inputs', 'window', 'schema', 'properties', 'weights'], { type: 'array' }],
    ['a reference with more beside it', ['outputs', 'grid', 'schema', 'type'], 'object'],
  ])('refuses %s', (_, path, to) => {
    expect(validate(changed(DESCRIPTION, path, to))).not.toEqual([]);
  });
});
