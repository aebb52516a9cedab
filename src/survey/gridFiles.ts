import type { GridOutput, Slot } from '../operations/types.js';
import { memoryScratch, memorySink } from '../raster/byteStores.js';
import { CellSample } from '../raster/cellSample.js';
import { CHANCE_RAMP, RESIDUAL_RAMP } from '../raster/colourRamps.js';
import { encodeCog } from '../raster/encodeCog.js';
import { gridStatistics, type GridStatistics } from '../raster/gridStatistics.js';
import { inMemory } from '../raster/inMemory.js';
import { sldStyle } from '../raster/sldStyle.js';
import type { Grid, RowSource } from '../raster/types.js';
import { writeCog, type CogOptions } from '../raster/writeCog.js';
import { residualRange } from '../report/residualRange.js';
import type { Site } from '../site/types.js';
import type { Delivered } from './deliver.js';
import type { Host, Spool } from './host.js';

/** A grid that has no negative values: shown from nothing upwards. */
const ERROR_ROLE = 'residual_error';
/** Grids with a role of their own; every further grid is a transform. */
const ROLES: ReadonlySet<string> = new Set(['residual', ERROR_ROLE, 'detection', 'covered']);
/** Unit of a share or a chance, which a style shows from 0 to 1. */
const SHARE = '1';

/** A grid as COG in the frame's own unit, with its style beside it. One that is made as its rows are read is never held as a whole. */
export async function gridFiles(role: string, grid: GridOutput, { slot, site, host }: { slot: Slot; site: Site; host: Host }): Promise<Delivered[]> {
  const { frame } = site;
  const unit = grid.unit ?? slot.unit ?? '';
  const path = `${role}.tif`;
  const { content, statistics, values } = await written(grid, { path, host, cog: { crs: frame, deflate: host.deflate, description: slot.title, unit } });
  const raster = {
    epsg: frame.epsg, width: grid.width, height: grid.height, west: grid.west / frame.metresPerUnit, north: grid.north / frame.metresPerUnit,
    cell: grid.cellM / frame.metresPerUnit, unit, ...(statistics ? { statistics: stacStatistics(statistics) } : {}),
  };
  const files: Delivered[] = [{
    key: role, path, title: slot.title, mediaType: 'image/tiff; application=geotiff; profile=cloud-optimized',
    roles: [ROLES.has(role) ? role : 'transform', 'data'], raster, content,
  }];
  const style = styleOf(role, values, { title: slot.title, unit });
  if (style !== null) {
    files.push({
      key: `${role}_sld`, path: `${role}.sld`, title: `${slot.title}: style`, mediaType: 'application/vnd.ogc.sld+xml', roles: ['style'],
      content: new TextEncoder().encode(style),
    });
  }
  return files;
}

interface WrittenGrid extends Pick<Delivered, 'content'> {
  readonly statistics: GridStatistics | null;
  /** What the style's range is taken from: all cells, or a sample of them. */
  readonly values: Grid['values'];
}

interface Writing {
  readonly path: string;
  readonly host: Host;
  readonly cog: CogOptions;
}

async function written(grid: GridOutput, writing: Writing): Promise<WrittenGrid> {
  if (!inMemory(grid)) return streamed(grid, writing);
  return { content: await encodeCog(grid, writing.cog), statistics: gridStatistics(Float32Array.from(grid.values), NaN), values: grid.values };
}

/** All from one pass over the rows. */
async function streamed(grid: RowSource, { path, host, cog }: Writing): Promise<WrittenGrid> {
  const { width, height, west, north, cellM } = grid;
  const sample = new CellSample(width * height);
  const source: RowSource = {
    width, height, west, north, cellM,
    async readRows(first, count) {
      host.progress(`${path}: ${Math.round((100 * first) / height)} %`);
      const rows = await grid.readRows(first, count);
      sample.add(rows);
      return rows;
    },
  };
  const spool = await host.spool?.(path) ?? memorySpool();
  const { statistics } = await writeCog(source, spool.sink, { ...cog, scratch: spool.scratch });
  return { content: await spool.end(), statistics, values: sample.values() };
}

function memorySpool(): Pick<Spool, 'sink' | 'scratch'> & { end(): Uint8Array } {
  const sink = memorySink();
  return { sink, scratch: memoryScratch(), end: sink.bytes };
}

function styleOf(role: string, values: Grid['values'], { title, unit }: { title: string; unit: string }): string | null {
  if (unit === SHARE) return sldStyle(CHANCE_RAMP, { low: 0, high: 1 }, { layer: role, title });
  const range = residualRange({ values });
  if (range && role === ERROR_ROLE) return sldStyle(CHANCE_RAMP, { low: 0, high: range.high }, { layer: role, title, unit });
  return range && sldStyle(RESIDUAL_RAMP, range, { layer: role, title, unit });
}

function stacStatistics({ minimum, maximum, mean, standardDeviation, validPercent }: GridStatistics): Record<string, number> {
  return { minimum, maximum, mean, stddev: standardDeviation, valid_percent: validPercent };
}
