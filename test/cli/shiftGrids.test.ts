import { cpSync, existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { demoFolder, edit, editSurvey, ironplat, ironplatWith } from '../support/cli.js';

/** NOAA's NADCON grids as GeoTIFF, public domain. */
const GRIDS = join(import.meta.dirname, '../../../shared/checks/grids');
const NONE = (): boolean => false;

function shifts(folder: string, out: string): string[] {
  const layer = JSON.parse(readFileSync(join(folder, out, 'records.geojson'), 'utf8')) as { features: { properties: { shift: string } }[] };
  return layer.features.map(({ properties }) => properties.shift);
}

describe('datum-shift grids', () => {
  it.skipIf(!existsSync(GRIDS))('come from the survey file\'s folder, or from PROJ_DATA, and are named in the output', async () => {
    const folder = demoFolder({ lines: NONE });
    mkdirSync(join(folder, 'grids'));
    cpSync(join(GRIDS, 'us_noaa_conus.tif'), join(folder, 'grids/us_noaa_conus.tif'));
    expect((await ironplatWith({ PROJ_DATA: join(folder, 'grids') }, folder, 'locate', '--survey', 'survey.json', '--out', 'proj')).status).toBe(0);
    editSurvey(folder, (survey) => { survey.grids = ['grids']; });
    expect((await ironplat(folder, 'locate', '--survey', 'survey.json', '--out', 'own')).status).toBe(0);
    for (const out of ['proj', 'own']) expect(shifts(folder, out).every((shift) => shift.includes('us_noaa_conus.tif')), shifts(folder, out).join()).toBe(true);
  });

  it('that cannot be read, or lead between datums that are not used, are answered', async () => {
    const folder = demoFolder({ lines: NONE });
    writeFileSync(join(folder, 'broken.gsb'), 'no grid at all');
    editSurvey(folder, (survey) => { survey.grids = ['broken.gsb']; });
    const answer = await ironplat(folder, 'locate', '--survey', 'survey.json', '--out', 'x');
    expect(answer.status).toBe(1);
    expect(answer.err).toMatch(/^ironplat: broken\.gsb.*found .*, wanted /);
    edit(folder, 'survey.json', (text) => text.replace('broken.gsb', 'nowhere'));
    expect((await ironplat(folder, 'locate', '--survey', 'survey.json', '--out', 'x')).err).toContain('nowhere');
  });

  it('are not needed in the lower 48, and the shipped one is named', async () => {
    const folder = demoFolder({ lines: NONE });
    await ironplat(folder, 'locate', '--survey', 'survey.json', '--out', 'x');
    expect(shifts(folder, 'x').every((shift) => shift.includes('NADCON conus'))).toBe(true);
  });
});
