import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { encodeGpx, type GpxRoute } from '../../src/vector/encodeGpx.js';
import { openWithGdal } from '../support/gdal.js';

const ROUTES: readonly GpxRoute[] = [
  { name: 'line 3 & <4>', description: 'Őrség "north"', points: [[-80.1234567891, 40.25], [-80.125, 40.2501]] },
  { name: 'tie 1', points: [[-80.13, 40.2], [-80.12, 40.21], [-80.11, 40.2]] },
];
const text = (routes: readonly GpxRoute[], timeS?: number): string => new TextDecoder().decode(encodeGpx({ name: 'Tansy Hollow', routes, ...(timeS === undefined ? {} : { timeS }) }));

describe('encodeGpx', () => {
  it('is read by GDAL: routes in order, with names and places', async () => {
    const { vector, messages } = await openWithGdal({ 'x.gpx': encodeGpx({ name: 'Tansy Hollow', routes: ROUTES }) }, { ogrinfo: ['-features', 'routes'] });
    expect(messages).toEqual([]);
    const routes = vector!.layers.find(layer => layer.name === 'routes')!;
    expect(routes.features!.map(feature => [feature.properties.name, feature.properties.desc ?? null, feature.properties.number])).toEqual([['line 3 & <4>', 'Őrség "north"', 1], ['tie 1', null, 2]]);
    expect(routes.features![0]!.geometry!.coordinates).toEqual([[-80.1234568, 40.25], [-80.125, 40.2501]]);
    expect(routes.geometryFields[0]!.coordinateSystem!.projjson!.id!.code).toBe(4326);
  });
  it('keeps the order of elements of the schema', () => {
    const tags = [...text(ROUTES.slice(0, 1), 1776171900).matchAll(/<(\w+)/g)].map(match => match[1]);
    expect(tags).toEqual(['gpx', 'metadata', 'name', 'time', 'bounds', 'rte', 'name', 'desc', 'number', 'rtept', 'rtept']);
    expect(text(ROUTES, 1776171900)).toContain('<time>2026-04-14T13:05:00Z</time>');
    expect(text(ROUTES)).toContain('<bounds minlat="40.2000000" minlon="-80.1300000" maxlat="40.2501000" maxlon="-80.1100000"/>');
  });
  it('knows no clock, and leaves out what XML cannot hold', () => {
    expect(text(ROUTES)).not.toContain('<time>');
    expect(text([{ name: 'a\u0000\u0008b', points: [] }])).toContain('<name>ab</name>');
  });
  it('refuses metres', () => expect(() => text([{ name: 'x', points: [[456_000, 4_400_000]] }])).toThrow(UserError));
});
