// Grids a CSV file of x, y, z to a COG and prints how long each part took and the peak memory, as one line of JSON.
// A process of its own for each file: so start-up counts, as it does for GDAL, and the peak is this file's.
// Usage: node test/bench/gridFile.mjs in.csv out.tif cells spacing [threads, 0: none]
import { open } from 'node:fs/promises';
import { availableParallelism } from 'node:os';
import { existsSync, readFileSync } from 'node:fs';
import { deflate } from '../../dist/cli/deflate.js';
import { writeCogFile } from '../../dist/cli/rasterFiles.js';
import { tileThreads } from '../../dist/cli/tileThreads.js';
import { crs } from '../../dist/src/geodesy/crs.js';
import { gridTiled } from '../../dist/src/grid/gridTiled.js';
import { NumberReader } from '../../dist/src/table/numberReader.js';

const PIECE_BYTES = 1 << 23;

const [input, output, cells, spacing, count] = process.argv.slice(2);
const threads = Number(count ?? availableParallelism());
const begin = performance.now();
const pool = threads > 0 ? tileThreads(threads) : null;
pool?.start();
const file = await open(input, 'r');
const reader = new NumberReader(['x', 'y', 'z'], { source: input, bytes: (await file.stat()).size });
const piece = new Uint8Array(PIECE_BYTES);
for (;;) {
  const { bytesRead } = await file.read(piece, 0, PIECE_BYTES);
  if (bytesRead === 0) break;
  reader.push(piece.subarray(0, bytesRead));
}
await file.close();
const { rows, columns: [x, y, value] } = reader.end();
const read = performance.now();

const side = Number(cells);
let waited = 0;
const grid = gridTiled({ x, y, value }, { cellM: 1, spacingM: Number(spacing), bounds: { west: 0, south: 0, east: side, north: side }, ...(pool ? { solve: pool.solve } : {}) });
const laid = performance.now();
const timed = { ...grid, async readRows(first, rowCount) {
  const start = performance.now();
  const values = await grid.readRows(first, rowCount);
  waited += performance.now() - start;
  return values;
} };
await writeCogFile(timed, output, { crs: crs(26917), deflate, unit: 'nT' });
const written = performance.now();
await pool?.close();
const status = existsSync('/proc/self/status') ? readFileSync('/proc/self/status', 'utf8') : '';
const peakMB = Number(/^VmHWM:\s+(\d+)/m.exec(status)?.[1] ?? process.resourceUsage().maxRSS) / 1024;
const { user, system } = process.cpuUsage();
console.log(JSON.stringify({
  rows, readMs: read - begin, layMs: laid - read, gridMs: laid - read + waited, restMs: written - laid - waited, totalMs: written - begin,
  cpuMs: (user + system) / 1000, peakMB, range: grid.range, overlapCells: grid.overlapCells, ...grid.summary(),
}));
