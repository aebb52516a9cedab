import { readdir } from 'node:fs/promises';
import { delimiter, join } from 'node:path';
import type { Survey } from '../src/survey/readSurvey.js';
import type { Terminal } from './terminal.js';

/** Files of PROJ's data folder that lead from NAD27 to NAD83; the others are not read. */
const NAD27_GRIDS = ['us_noaa_conus.tif', 'us_noaa_alaska.tif', 'ca_nrc_ntv2_0.tif', 'conus', 'alaska', 'ntv2_0.gsb'];

/** The survey with the datum-shift grids of PROJ_DATA after its own, where that is set; its own come first. */
export async function withStandardGrids(survey: Survey, terminal: Terminal): Promise<Survey> {
  const found = await standardGrids(terminal);
  return found.length === 0 ? survey : { ...survey, common: { ...survey.common, grids: [...(survey.common.grids as string[]), ...found] } };
}

async function standardGrids({ env }: Terminal): Promise<string[]> {
  const found: string[] = [];
  for (const folder of (env.PROJ_DATA ?? '').split(delimiter).filter(Boolean)) {
    const names = new Set(await readdir(folder));
    found.push(...NAD27_GRIDS.filter((name) => names.has(name)).map((name) => join(folder, name)));
  }
  return found;
}
