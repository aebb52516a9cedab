import { describe, expect, it } from 'vitest';
import { objectSchema } from '../../src/operations/schema.js';
import type { GridOutput, Operation } from '../../src/operations/types.js';
import { memoryScratch, memorySink } from '../../src/raster/byteStores.js';
import type { Grid } from '../../src/raster/types.js';
import { deliverRun } from '../../src/survey/deliverRun.js';
import type { Host, SpooledFile } from '../../src/survey/host.js';
import { readSurvey } from '../../src/survey/readSurvey.js';
import { runSurvey } from '../../src/survey/runSurvey.js';
import { memoryHost } from '../support/memoryHost.js';

const [WIDTH, HEIGHT] = [600, 700];
const HELD: Grid = {
  width: WIDTH, height: HEIGHT, west: 500_000, north: 4_400_000, cellM: 2,
  values: Float32Array.from({ length: WIDTH * HEIGHT }, (_, k) => (k % 1000 < 30 ? NaN : 30 * Math.sin(k / 400) + ((k * 7919) % 101) / 50)),
};
const RING = [[-81, 39.7], [-80.99, 39.7], [-80.99, 39.71], [-81, 39.71], [-81, 39.7]];
const HOST = memoryHost({ 'parcel.geojson': JSON.stringify({ type: 'Feature', properties: {}, geometry: { type: 'Polygon', coordinates: [RING] } }) });

function streamed(): GridOutput {
  const { values, ...place } = HELD;
  return { ...place, unit: 'nT/m', readRows: (first, count) => values.subarray(first * WIDTH, (first + count) * WIDTH) };
}

async function delivered(grid: GridOutput, host: Host): Promise<ReadonlyMap<string, Uint8Array | SpooledFile>> {
  const operation: Operation = {
    id: 'hills', version: '1.0.0', title: 'Hills', summary: 'Of the test.', parameters: objectSchema({}), inputs: {}, sources: [], example: 'none',
    outputs: { hills: { title: 'Hills', form: 'grid', unit: 'nT' } },
    run: async () => ({ hills: grid }),
  };
  const text = JSON.stringify({ crs: 'EPSG:26917', date: '2026-04-14', parcel: 'parcel.geojson' });
  const survey = readSurvey(text, 'survey.json', { operations: [operation], resolve: (path) => path });
  const result = await runSurvey(survey, { operations: [operation], host });
  return (await deliverRun(result, { host, inputs: [], formats: [], relative: (path) => path, manifest: true })).files;
}

describe('deliverRun of a grid that is made as its rows are read', () => {
  it('gives the bytes of the grid from memory where there is only memory, in the unit that the grid has', async () => {
    const held = await delivered({ ...HELD, unit: 'nT/m' }, HOST);
    const files = await delivered(streamed(), HOST);
    for (const name of ['hills.tif', 'hills.sld']) expect(Buffer.compare(files.get(name) as Uint8Array, held.get(name) as Uint8Array), name).toBe(0);
    expect(Buffer.from(files.get('hills.sld') as Uint8Array).toString()).toContain('nT/m');
  });

  it('writes it into the room that the host has, in order, and hands on what became of it', async () => {
    const held = await delivered({ ...HELD, unit: 'nT/m' }, HOST);
    const sink = memorySink();
    const places: string[] = [];
    const spool: Host['spool'] = async (path) => {
      places.push(path);
      return { sink, scratch: memoryScratch(), end: async () => ({ bytes: sink.bytes().length, sha256: HOST.sha256(sink.bytes()), moveTo: async (to) => void places.push(to) }) };
    };
    const progress: string[] = [];
    const files = await delivered(streamed(), { ...HOST, spool, progress: (message) => void progress.push(message) });
    const file = files.get('hills.tif') as SpooledFile;
    expect(Buffer.compare(sink.bytes(), held.get('hills.tif') as Uint8Array)).toBe(0);
    const text = (name: string): string => Buffer.from(files.get(name) as Uint8Array).toString('utf8');
    const listed = { path: 'hills.tif', bytes: sink.bytes().length, sha256: HOST.sha256(sink.bytes()) };
    expect(JSON.parse(text('provenance.json')).outputs[0]).toEqual(listed);
    expect(JSON.parse(text('item.json')).assets.hills).toMatchObject({ 'file:size': listed.bytes, 'file:checksum': `1220${listed.sha256}` });
    expect(progress).toEqual(expect.arrayContaining(['hills.tif: 0 %', 'hills.tif: 73 %']));
    await file.moveTo('there/hills.tif');
    expect(places).toEqual(['hills.tif', 'there/hills.tif']);
  });
});
