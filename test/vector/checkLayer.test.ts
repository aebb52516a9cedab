import type { Geometry } from 'geojson';
import { describe, expect, it } from 'vitest';
import { checkLayer } from '../../src/vector/checkLayer.js';
import type { Field, FieldValue, Layer } from '../../src/vector/types.js';
import { GEOMETRY_TYPES, layerOf } from './layers.js';

const point: Geometry = { type: 'Point', coordinates: [0, 0] };
const withField = (field: Partial<Field>): Layer => ({ ...layerOf('Point', []), fields: [{ name: 'ok', type: 'real', title: '', ...field }] });
const withValue = (name: string, value: FieldValue): Layer => layerOf('Point', [{ geometry: point, values: { [name]: value } }]);
const withShape = (geometryType: Layer['geometryType'], geometry: unknown): Layer => layerOf(geometryType, [{ geometry: geometry as Geometry, values: {} }]);

describe('checkLayer', () => {
  it.each(GEOMETRY_TYPES)('passes a good layer of %s', geometryType => expect(() => checkLayer(layerOf(geometryType))).not.toThrow());

  it.each<[string, Layer, RegExp]>([
    ['name of eleven characters', withField({ name: 'elevenchars' }), /elevenchars/],
    ['upper case', withField({ name: 'Depth' }), /Depth/],
    ['reserved', withField({ name: 'fid' }), /fid/],
    ['decimals of a text', withField({ type: 'text', decimals: 2 }), /decimals/],
    ['no name', { ...layerOf('Point', []), name: '' }, /without a name/],
    ['twice', { ...layerOf('Point', []), fields: [{ name: 'a', type: 'text', title: '' }, { name: 'a', type: 'real', title: '' }] }, /two fields/],
    ['unknown field', withValue('other', 1), /other is no field/],
    ['number in a text', withValue('name', 1), /no text/],
    ['text in a number', withValue('size_m', '1'), /no real/],
    ['infinity', withValue('size_m', Infinity), /no real/],
    ['fraction in an integer', withValue('count', 1.5), /no integer/],
    ['another geometry', withShape('Point', { type: 'LineString', coordinates: [[0, 0], [1, 1]] }), /holds a LineString/],
    ['height', withShape('Point', { type: 'Point', coordinates: [0, 0, 5] }), /position/],
    ['NaN', withShape('Point', { type: 'Point', coordinates: [0, NaN] }), /position/],
    ['no position', withShape('LineString', { type: 'LineString', coordinates: [] }), /without positions/],
    ['line of one position', withShape('LineString', { type: 'LineString', coordinates: [[0, 0]] }), /line of 1/],
    ['open ring', withShape('Polygon', { type: 'Polygon', coordinates: [[[0, 0], [1, 0], [1, 1], [0, 1]]] }), /closed/],
  ])('refuses: %s', (_, layer, message) => expect(() => checkLayer(layer)).toThrow(message));
});
