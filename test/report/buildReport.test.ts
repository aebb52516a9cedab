import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { report } from '../../src/operations/report.js';
import { buildReport } from '../../src/report/buildReport.js';
import { reportFiles } from '../../src/report/reportFiles.js';
import type { ReportContent } from '../../src/report/types.js';
import { anomalyLayers } from '../../src/survey/layers/anomalyLayers.js';
import { findingLayers } from '../../src/survey/layers/findingLayers.js';
import { planLayers } from '../../src/survey/layers/planLayers.js';
import { recordLayers } from '../../src/survey/layers/recordLayers.js';
import { hasProgram } from '../support/debianTools.js';
import { cellsWithGdal, openWithGdal } from '../support/gdal.js';
import { content, residual, site } from './madeContent.js';
import { plain, readHtml, tableOf } from './readHtml.js';

const TEXT = buildReport(content, { preparedBy: 'Larch & Daughters Field Services', note: 'A first visit.' });
const PLAIN = plain(TEXT.replace(/<style>.*?<\/style>/s, ''));
/** A percentage in a cell, as a chance; `<` and `>` fall away. */
const chance = (cell: string): number => Number(cell.replace(/[<>%\s]/g, '')) / 100;
/** A number in a cell. */
const numeric = (cell: string): number => Number(cell.replace(/\s/g, '').replace('\u2212', '-'));

describe('the document', () => {
  it('is well formed, with one title and its sections in order', () => {
    const tags = readHtml(TEXT);
    expect(tags.filter(({ name }) => name === 'h1').map(({ text }) => text)).toEqual(['Tansy Hollow tract, Marlow County']);
    expect(tags.filter(({ name }) => name === 'section').map(({ attributes }) => attributes.get('id'))).toEqual([
      'found', 'maps', 'findings', 'dig', 'records', 'anomalies', 'reduction', 'plan', 'blind', 'accuracy', 'cautions', 'warnings', 'files', 'sources', 'provenance',
    ]);
    const ids = tags.map(({ attributes }) => attributes.get('id')).filter((id) => id !== undefined);
    expect(new Set(ids).size).toBe(ids.length);
  });

  it('fetches nothing and runs nothing', () => {
    for (const { name, attributes } of readHtml(TEXT)) {
      expect(['script', 'link', 'iframe', 'object', 'embed', 'base', 'form']).not.toContain(name);
      for (const [key, value] of attributes) {
        expect(key.startsWith('on')).toBe(false);
        if (['href', 'src', 'srcset', 'action', 'data', 'poster'].includes(key)) expect(value).toMatch(/^(#[a-z-]+|data:image\/png;base64,[A-Za-z0-9+/=]+)$/);
        if (value.includes('url(')) expect(value).toMatch(/^url\(#[a-z-]+\)$/);
      }
    }
    expect(TEXT).not.toMatch(/@import|https?:|javascript:/);
    expect(/<style>(.*?)<\/style>/s.exec(TEXT)![1]).not.toContain('url(');
  });

  it('leads every link to a part that is there', () => {
    const tags = readHtml(TEXT);
    const ids = new Set(tags.map(({ attributes }) => attributes.get('id')));
    const targets = tags.flatMap(({ attributes }) => [...attributes.values()].flatMap((value) => [...value.matchAll(/^(?:url\()?#([a-z-]+)\)?$/g)].map(([, id]) => id!)));
    expect(targets.length).toBeGreaterThan(15);
    expect(targets.filter((id) => !ids.has(id))).toEqual([]);
  });

  it('has the same bytes twice', () => expect(buildReport(content, { preparedBy: 'Larch & Daughters Field Services', note: 'A first visit.' }) === TEXT).toBe(true));

  it('lets no text out of its place', () => {
    const hostile = `"><script>alert('x')</script>&amp;<b onclick="y">`;
    const spoil = (value: unknown, key = ''): unknown => {
      if (typeof value === 'string') return ['finding', 'class', 'kind', 'role', 'datum', 'recordId', 'anomalyId', 'unit'].includes(key) ? value : value + hostile;
      if (Array.isArray(value)) return value.map((inner) => spoil(inner, key));
      if (value === null || typeof value !== 'object' || ArrayBuffer.isView(value) || value === site.frame) return value;
      return Object.fromEntries(Object.entries(value).map(([name, inner]) => [name, spoil(inner, name)]));
    };
    const spoilt = spoil({ ...content, findings: JSON.parse(JSON.stringify(content.findings).replaceAll('37-04', '<i>37-04').replaceAll('null', '-1')) as ReportContent['findings'] }) as ReportContent;
    const text = buildReport(spoilt, { title: hostile, preparedFor: hostile, preparedBy: hostile, note: hostile });
    const tags = readHtml(text);
    expect(tags.filter(({ name, attributes }) => name === 'script' || attributes.has('onclick'))).toEqual([]);
    expect(text.split('alert(').length).toBeGreaterThan(30);
  });

  it.each([
    ['nothing but the ground', {}],
    ['records and plan only', { records: content.records, plan: content.plan }],
    ['no anomalies', { records: content.records, readings: content.readings, residual }],
    ['empty lists', { records: { placed: [], unplaced: [] }, anomalies: { ...content.anomalies!, list: [] }, findings: { list: [], pairs: [], notes: [] } }],
    ['a residual without a value', { residual: { ...residual, values: residual.values.map(() => NaN) } }],
  ] as ReadonlyArray<[string, Partial<ReportContent>]>)('stands with %s', (_, parts) => {
    const text = buildReport({ site, ...parts });
    expect(readHtml(text).filter(({ name }) => name === 'section').length).toBeGreaterThan(4);
    expect(plain(text)).not.toMatch(/NaN|undefined|Infinity|\[object/);
  });

  it('says nothing that is no word', () => expect(PLAIN).not.toMatch(/NaN|undefined|Infinity|\[object|null/));

  it.skipIf(!hasProgram('chromium'))('is taken by a browser as it was written', { timeout: 60_000 }, () => {
    const folder = mkdtempSync(join(tmpdir(), 'ironplat-report-'));
    try {
      writeFileSync(join(folder, 'report.html'), TEXT);
      const run = spawnSync('chromium', ['--headless', '--no-sandbox', '--disable-gpu', '--dump-dom', `file://${join(folder, 'report.html')}`], { encoding: 'utf8', cwd: folder });
      const counted = (text: string): number => [...text.matchAll(/<[a-z]/gi)].length;
      expect(counted(run.stdout)).toBe(counted(TEXT));
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });
});

describe('what was found', () => {
  it('begins with the count of everything', () => {
    expect(PLAIN).toContain('Of 7 records with a place, 3 are located, 1 is ambiguous, 2 were not found and 1 is in ground not searched. 1 casing on the ground is on no record. 1 record could not be placed and needs mending.');
  });

  it('tells each record in words, with its chance', () => {
    for (const { recordId } of [...content.records!.placed, ...content.records!.unplaced]) expect(PLAIN).toContain(recordId);
    expect(PLAIN).toContain('9.4 m (31 ft) north-west of the recorded place (anomaly A1, its top about 0.8 m (2.6 ft) below ground). The chance that this casing is the recorded well is 99 %.');
    expect(PLAIN).toContain('The search does not settle which casing it is: anomaly A5 (62 %), anomaly A4 (33 %) or none of these (5 %).');
    expect(PLAIN).toContain('The chance that the well lies in ground searched is 95 %, and that it lies there and a casing as stated would have been detected, 89 %. The chance that a casing as stated is still there, wherever the well may lie, is 12 %.');
    expect(PLAIN).toContain('the chance that it lies in ground searched is 2 %');
    expect(PLAIN).toContain('The chance that none of the records is this casing is 94 %.');
  });

  it('names row, column, value and what to do for a record that could not be placed', () => {
    expect(PLAIN).toContain('permits.csv, row 8, lon: 79 52 11.0 E. The place lies 11,300 km from the parcel; with a minus sign it would lie inside. Correct the sign of the longitude.');
  });

  it('says what cannot be seen and what to mind', () => {
    for (const words of ['pulled', 'cut off below reach', 'never of steel', 'one-call', 'Methane', 'hydrogen sulphide', 'No ignition sources', 'Unexploded ordnance was not assessed', 'Licensed practice and local codes prevail']) expect(PLAIN).toContain(words);
  });
});

describe('the tables', () => {
  it('give every finding with its numbers', () => {
    const [head, ...rows] = tableOf(TEXT, 'findings');
    expect(head).toEqual(['Record', 'Anomaly', 'Finding', 'Match', 'Distance, m', 'Azimuth, °', 'Covered', 'Detected', 'Remains', 'Dig']);
    expect(rows.length).toBe(content.findings!.list.length);
    for (const [i, finding] of content.findings!.list.entries()) {
      const [record, anomaly, , match, distance, , covered, detected, remains, dig] = rows[i]! as [string, string, string, string, string, string, string, string, string, string];
      expect(record).toBe(finding.recordId || '–');
      expect(anomaly).toBe(finding.anomalyId || '–');
      for (const [cell, p] of [[match, finding.pMatch], [covered, finding.pCovered], [detected, finding.pDetect], [remains, finding.pRemains]] as const) {
        if (Number.isNaN(p)) expect(cell).toBe('–');
        else expect(Math.abs(chance(cell) - p)).toBeLessThanOrEqual(0.00061);
      }
      if (Number.isFinite(finding.distM)) expect(numeric(distance)).toBeCloseTo(finding.distM, 1);
      expect(dig).toBe(finding.digOrder > 0 ? String(finding.digOrder) : '–');
    }
  });

  it('give places to dig that lead back to the casing, in feet and in degrees', () => {
    const rows = tableOf(TEXT, 'dig').slice(1);
    expect(rows.map(([dig]) => dig)).toEqual(['1', '2', '3', '4']);
    for (const [i, row] of rows.entries()) {
      const finding = content.findings!.list.find(({ digOrder }) => digOrder === i + 1)!;
      const [east, north, lat, lon] = row.slice(2, 6).map(numeric) as [number, number, number, number];
      expect(Math.abs(east * site.frame.metresPerUnit - finding.x)).toBeLessThan(0.002);
      expect(Math.abs(north * site.frame.metresPerUnit - finding.y)).toBeLessThan(0.002);
      // The receiver's frame is not stated, so WGS 84 is NAD83 by the null shift; the report says so.
      const [x, y] = site.frame.forward(lon, lat);
      expect(Math.hypot(x - finding.x, y - finding.y)).toBeLessThan(0.015);
      expect(row[6]).toBe('0.73 × 0.49');
      expect(row[8]).toBe('0.8 ± 0.4');
    }
    expect(PLAIN).toContain('none (NAD83 as WGS 84, EPSG:1188)');
  });

  it('give every record, anomaly and step', () => {
    expect(tableOf(TEXT, 'records').length - 1).toBe(content.records!.placed.length);
    expect(tableOf(TEXT, 'records', 1)[1]).toEqual(['37-0418', 'permits.csv, row 8', 'lon', '79 52 11.0 E', expect.stringContaining('11,300 km'), 'correct the sign of the longitude']);
    expect(tableOf(TEXT, 'anomalies').slice(1).map(([id]) => id)).toEqual(content.anomalies!.list.map(({ anomalyId }) => anomalyId));
    expect(tableOf(TEXT, 'reduction').slice(1).map(([, column]) => column)).toEqual(['spike_nt', 'base_nt', 'main_nt']);
    expect(PLAIN).toContain('7 050 readings on 50 lines, 2026-04-14 12:33 to 2026-04-14 14:07 UTC. 6 949 readings used; left out: 1 spike, 100 base gap.');
    expect(tableOf(TEXT, 'plan')[1]).toEqual(['37-0411', '95.0 %', '94.0 %', '97.0 %', '93.0 %']);
  });

  it('have captions, and headers for columns and rows', () => {
    const tags = readHtml(TEXT);
    const count = (name: string, test: (attributes: ReadonlyMap<string, string>) => boolean = () => true): number => tags.filter((tag) => tag.name === name && test(tag.attributes)).length;
    expect(count('caption')).toBe(count('table'));
    expect(count('th', (attributes) => attributes.get('scope') === 'row')).toBe(count('tr') - count('thead'));
    expect(count('svg', (attributes) => attributes.get('role') === 'img' && attributes.has('aria-labelledby'))).toBe(2);
    expect(count('svg', (attributes) => !attributes.has('role') && attributes.get('aria-hidden') !== 'true')).toBe(0);
  });
});

describe('the pictures', () => {
  const images = [...TEXT.matchAll(/data:image\/png;base64,([A-Za-z0-9+/=]+)/g)].map(([, text]) => new Uint8Array(Buffer.from(text!, 'base64')));

  it('are the grids, cell by cell', async () => {
    expect(images.length).toBe(2);
    const { raster } = await openWithGdal({ 'a.png': images[0]! });
    expect(raster!.size).toEqual([residual.width, residual.height]);
    expect(raster!.bands.length).toBe(4);
    // Red over blue where the field is well above zero, blue over red where it is well below.
    const red = (await cellsWithGdal(images[0]!)).values;
    const peak = 265 * 430 + 96;
    const trough = 110 * 430 + 330;
    expect(residual.values[peak]).toBeGreaterThan(500);
    expect(residual.values[trough]).toBeLessThan(-300);
    expect(red[peak]!).toBeGreaterThan(red[trough]! + 50);
  });

  it('are made of means where the grid is too large', async () => {
    const small = buildReport(content, { pictureCells: 200 });
    const png = new Uint8Array(Buffer.from(/data:image\/png;base64,([A-Za-z0-9+/=]+)/.exec(small)![1]!, 'base64'));
    expect((await openWithGdal({ 'a.png': png })).raster!.size).toEqual([108, 90]);
    expect(plain(small)).toContain('Cells of 1 m, shown by means over 4 × 4 of them.');
  });
});

describe('the operation', () => {
  it('needs nothing but a site, and tells of all that it is given', async () => {
    expect(Object.values(report.inputs).every(({ optional }) => optional)).toBe(true);
    const task = { site, parameters: { title: '', prepared_by: 'Larch & Daughters', picture_cells: 300 }, files: { read: () => Promise.reject(new Error('no file is read')), has: () => Promise.resolve(false) }, seed: 7, progress: () => undefined, warn: () => undefined };
    const alone = (await report.run({ ...task, inputs: {} }))['report'] as string;
    expect(plain(alone)).toContain('there are no readings');
    const { site: _, warnings, files, sources, provenance, ...inputs } = content;
    const full = (await report.run({ ...task, inputs, before: { warnings: ['mind the gap'], operations: [{ id: 'locate', version: '1.0.0', sources: ['A published source'] }] } }))['report'] as string;
    expect([warnings, files, sources, provenance].every((part) => part !== undefined)).toBe(true);
    for (const words of ['37-0411', 'mind the gap', 'A published source', 'seed 7', 'locate 1.0.0', 'Larch & Daughters', 'findings.geojson, findings.fgb']) expect(plain(full)).toContain(words);
  });

  it('names the files as they are delivered', () => {
    const layers = [...recordLayers(content.records!, site), ...planLayers(content.plan!, site), ...anomalyLayers(content.anomalies!, site), ...findingLayers(content.findings!, site)];
    const names = reportFiles(content).map(({ name }) => name);
    expect(names.filter((name) => name.includes('.fgb')).toSorted()).toEqual(layers.map(({ name }) => `${name}.geojson, ${name}.fgb`).toSorted());
    expect(reportFiles({ site }).map(({ name }) => name)).toEqual(['item.json', 'provenance.json']);
  });
});
