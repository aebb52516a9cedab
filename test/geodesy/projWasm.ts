import { createRequire } from 'node:module';

/** The part of PROJ, as gdal3.js carries it, that the tests compare with: an independent implementation. */
export interface ProjWasm {
  /** Coordinates in the source's unit (longitude or easting first) to the target's; a system is a code or a definition. */
  transform(from: string, to: string, x: number[], y: number[]): { x: number[]; y: number[] };
  /** OGC WKT 1 of a system. */
  wkt(system: string): string;
}

interface EmscriptenModule {
  readonly HEAPF64: Float64Array;
  readonly HEAP32: Int32Array;
  UTF8ToString(at: number): string;
  ccall(name: string, result: string, types: string[], values: unknown[]): number;
}

/** Longitude and easting first, whatever the authority says. */
const TRADITIONAL_ORDER = 0;

export async function loadProj(): Promise<ProjWasm> {
  const start = createRequire(import.meta.url)('gdal3.js/node.js') as (options: object) => Promise<{ Module: EmscriptenModule }>;
  // The library takes its data path relative to the working folder, which is the project's in tests.
  const { Module: m } = await start({ path: 'node_modules/gdal3.js/dist/package', useWorker: false });
  const system = (text: string): number => {
    const handle = m.ccall('OSRNewSpatialReference', 'number', ['number'], [0]);
    const failed = m.ccall('OSRSetFromUserInput', 'number', ['number', 'string'], [handle, text]);
    if (failed !== 0) throw new Error(`PROJ does not read ${text}`);
    m.ccall('OSRSetAxisMappingStrategy', '', ['number', 'number'], [handle, TRADITIONAL_ORDER]);
    return handle;
  };
  return {
    transform(from, to, x, y) {
      const handle = m.ccall('OCTNewCoordinateTransformation', 'number', ['number', 'number'], [system(from), system(to)]);
      const at = m.ccall('malloc', 'number', ['number'], [24 * x.length]);
      m.HEAPF64.set([...x, ...y, ...x.map(() => 0)], at / 8);
      m.ccall('OCTTransform', 'number', ['number', 'number', 'number', 'number', 'number'], [handle, x.length, at, at + 8 * x.length, at + 16 * x.length]);
      const out = Array.from(m.HEAPF64.subarray(at / 8, at / 8 + 2 * x.length));
      m.ccall('free', '', ['number'], [at]);
      m.ccall('OCTDestroyCoordinateTransformation', '', ['number'], [handle]);
      return { x: out.slice(0, x.length), y: out.slice(x.length) };
    },
    wkt(text) {
      const at = m.ccall('malloc', 'number', ['number'], [8]);
      m.ccall('OSRExportToWkt', 'number', ['number', 'number'], [system(text), at]);
      return m.UTF8ToString(m.HEAP32[at / 4]!);
    },
  };
}
