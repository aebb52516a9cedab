import { createRequire } from 'node:module';
import { dirname, relative } from 'node:path';

/** The parts of gdal3.js that the tests use; its own types lack most of them. */
interface GdalDataset { readonly pointer: number; readonly path: string; readonly type: string; readonly info: unknown }
interface Gdal {
  open(path: string, openOptions?: string[]): Promise<{ datasets: GdalDataset[]; errors: unknown[] }>;
  close(dataset: GdalDataset): Promise<void>;
  gdalinfo(dataset: GdalDataset, options?: string[]): Promise<GdalInfo>;
  ogrinfo(dataset: GdalDataset, options?: string[]): Promise<OgrInfo>;
  gdal_translate(dataset: GdalDataset, options: string[], outputName: string): Promise<{ local: string }>;
  readonly Module: {
    readonly FS: {
      mkdirTree(path: string): void;
      writeFile(path: string, bytes: Uint8Array): void;
      readFile(path: string): Uint8Array;
      unlink(path: string): void;
    };
  };
}

/** `gdalinfo -json`, as far as tests read it. */
export interface GdalInfo {
  readonly driverShortName: string;
  readonly size: readonly [width: number, height: number];
  readonly geoTransform: readonly number[];
  readonly coordinateSystem?: { readonly wkt: string; readonly proj4?: string };
  readonly metadata: Readonly<Record<string, Readonly<Record<string, string>>>>;
  readonly stac?: { readonly 'proj:epsg'?: number };
  readonly bands: ReadonlyArray<{
    readonly type: string;
    readonly block: readonly [number, number];
    readonly description?: string;
    readonly noDataValue?: number | string;
    readonly unit?: string;
    readonly scale?: number;
    readonly offset?: number;
    readonly overviews?: ReadonlyArray<{ readonly size: readonly [number, number] }>;
    readonly metadata?: Readonly<Record<string, Readonly<Record<string, string>>>>;
  }>;
}

/** `ogrinfo -json`, as far as tests read it. */
export interface OgrInfo {
  readonly driverShortName: string;
  readonly layers: ReadonlyArray<{
    readonly name: string;
    readonly featureCount: number;
    readonly metadata?: Readonly<Record<string, Readonly<Record<string, string>>>>;
    readonly fields: ReadonlyArray<{ readonly name: string; readonly type: string; readonly width?: number; readonly precision?: number }>;
    readonly geometryFields: ReadonlyArray<{
      readonly name: string;
      readonly type: string;
      readonly extent?: readonly number[];
      readonly coordinateSystem?: { readonly wkt: string; readonly projjson?: { readonly id?: { readonly authority: string; readonly code: number } } };
    }>;
    readonly features?: ReadonlyArray<{
      readonly type: 'Feature';
      readonly fid?: number;
      readonly properties: Readonly<Record<string, unknown>>;
      readonly geometry: { readonly type: string; readonly coordinates: unknown } | null;
    }>;
  }>;
}

export interface Opened {
  readonly type: 'raster' | 'vector';
  /** The raster's info; null for a vector. */
  readonly raster: GdalInfo | null;
  /** The vector's info; null for a raster. */
  readonly vector: OgrInfo | null;
  /** What GDAL complained about while it opened and read the files. */
  readonly messages: readonly string[];
}

export interface OpenOptions {
  /** Options of `gdalinfo`, such as `-stats`. */
  readonly gdalinfo?: readonly string[];
  /** Options of `ogrinfo`, such as `-features`, `-al`, `-spat x0 y0 x1 y1` word by word. */
  readonly ogrinfo?: readonly string[];
  /** Open options of the driver, such as `OVERVIEW_LEVEL=0`. */
  readonly open?: readonly string[];
}

const messages: string[] = [];
let started: Promise<Gdal> | undefined;
let folders = 0;

/** Starts GDAL once a test file; its data lies beside its code and has to be named relative to the working folder. */
export function gdal(): Promise<Gdal> {
  const require = createRequire(import.meta.url);
  const start = require('gdal3.js/node.js') as (config: object) => Promise<Gdal>;
  started ??= start({
    path: relative(process.cwd(), dirname(require.resolve('gdal3.js/dist/package/gdal3.node.js'))),
    useWorker: false,
    logHandler: (text: string) => messages.push(text),
    errorHandler: (text: string) => messages.push(text),
  });
  return started;
}

/** Puts the files side by side into GDAL's memory, opens the first of them, lets `use` work with it and closes it. */
export async function withGdal<T>(
  files: Readonly<Record<string, Uint8Array>>, use: (gdal: Gdal, dataset: GdalDataset) => Promise<T>, open: readonly string[] = [],
): Promise<T> {
  const api = await gdal();
  const folder = `/output/opened-${folders += 1}`;
  const names = Object.keys(files);
  messages.length = 0;
  api.Module.FS.mkdirTree(folder);
  for (const name of names) api.Module.FS.writeFile(`${folder}/${name}`, files[name]!);
  try {
    const { datasets, errors } = await api.open(`${folder}/${names[0]}`, [...open]).catch((problem: unknown) => {
      throw new Error(`GDAL does not open ${names[0]}: ${JSON.stringify(problem)} ${messages.join(' ')}`);
    });
    const dataset = datasets[0];
    if (!dataset || errors.length > 0) throw new Error(`GDAL does not open ${names[0]}: ${JSON.stringify(errors)}`);
    try {
      return await use(api, dataset);
    } finally {
      await api.close(dataset);
    }
  } finally {
    for (const name of names) api.Module.FS.unlink(`${folder}/${name}`);
  }
}

/** What GDAL says of the first file (the others lie beside it, as a Shapefile needs). */
export function openWithGdal(files: Readonly<Record<string, Uint8Array>>, options: OpenOptions = {}): Promise<Opened> {
  return withGdal(files, async (api, dataset) => {
    const type = dataset.type === 'raster' ? 'raster' : 'vector';
    const raster = type === 'raster' ? await api.gdalinfo(dataset, [...options.gdalinfo ?? []]) : null;
    const vector = type === 'vector' ? await api.ogrinfo(dataset, [...options.ogrinfo ?? []]) : null;
    return { type, raster, vector, messages: [...messages] };
  }, options.open);
}

/** Cells of a raster's first band as GDAL decodes them, scale and offset not applied; `overview` from 0, the full image without it. */
export function cellsWithGdal(bytes: Uint8Array, overview?: number): Promise<{ width: number; height: number; values: Float64Array; messages: string[] }> {
  return withGdal({ 'cells.tif': bytes }, async (api, dataset) => {
    const { size: [width, height] } = await api.gdalinfo(dataset);
    const { local } = await api.gdal_translate(dataset, ['-of', 'ENVI', '-ot', 'Float64', '-b', '1', '-q'], `cells-${folders}`);
    const raw = api.Module.FS.readFile(local);
    api.Module.FS.unlink(local);
    return { width, height, values: new Float64Array(raw.slice().buffer), messages: [...messages] };
  }, overview === undefined ? [] : [`OVERVIEW_LEVEL=${overview}`]);
}
