import type { Slot } from '../operations/types.js';
import { CHANCE_RAMP, RESIDUAL_RAMP } from '../raster/colourRamps.js';
import { encodeCog } from '../raster/encodeCog.js';
import { gridStatistics, type GridStatistics } from '../raster/gridStatistics.js';
import { sldStyle } from '../raster/sldStyle.js';
import type { Grid } from '../raster/types.js';
import { residualRange } from '../report/residualRange.js';
import type { Site } from '../site/types.js';
import type { Delivered } from './deliver.js';
import type { Host } from './host.js';

/** A grid that has no negative values: shown from nothing upwards. */
const ERROR_ROLE = 'residual_error';
/** Grids with a role of their own; every further grid is a transform. */
const ROLES: ReadonlySet<string> = new Set(['residual', ERROR_ROLE, 'detection', 'covered']);
/** Unit of a share or a chance, which a style shows from 0 to 1. */
const SHARE = '1';

/** A grid as COG in the frame's own unit, with its style beside it. A grid may carry its unit; else the slot names it. */
export async function gridFiles(role: string, grid: Grid & { readonly unit?: string }, { slot, site, host }: { slot: Slot; site: Site; host: Host }): Promise<Delivered[]> {
  const { frame } = site;
  const unit = grid.unit ?? slot.unit ?? '';
  const content = await encodeCog(grid, { crs: frame, deflate: host.deflate, description: slot.title, unit });
  const statistics = gridStatistics(Float32Array.from(grid.values), NaN);
  const raster = {
    epsg: frame.epsg, width: grid.width, height: grid.height, west: grid.west / frame.metresPerUnit, north: grid.north / frame.metresPerUnit,
    cell: grid.cellM / frame.metresPerUnit, unit, ...(statistics ? { statistics: stacStatistics(statistics) } : {}),
  };
  const files: Delivered[] = [{
    key: role, path: `${role}.tif`, title: slot.title, mediaType: 'image/tiff; application=geotiff; profile=cloud-optimized',
    roles: [ROLES.has(role) ? role : 'transform', 'data'], raster, content,
  }];
  const style = styleOf(role, grid, { title: slot.title, unit });
  if (style !== null) {
    files.push({
      key: `${role}_sld`, path: `${role}.sld`, title: `${slot.title}: style`, mediaType: 'application/vnd.ogc.sld+xml', roles: ['style'],
      content: new TextEncoder().encode(style),
    });
  }
  return files;
}

function styleOf(role: string, grid: Grid, { title, unit }: { title: string; unit: string }): string | null {
  if (unit === SHARE) return sldStyle(CHANCE_RAMP, { low: 0, high: 1 }, { layer: role, title });
  const range = residualRange(grid);
  if (range && role === ERROR_ROLE) return sldStyle(CHANCE_RAMP, { low: 0, high: range.high }, { layer: role, title, unit });
  return range && sldStyle(RESIDUAL_RAMP, range, { layer: role, title, unit });
}

function stacStatistics({ minimum, maximum, mean, standardDeviation, validPercent }: GridStatistics): Record<string, number> {
  return { minimum, maximum, mean, stddev: standardDeviation, valid_percent: validPercent };
}
