// Times the writing of Cloud-Optimised GeoTIFFs, and gdal_translate on the same grid where GDAL is installed: same tiles,
// DEFLATE level, predictor, number of threads and resampling of overviews. Build first. Usage: node test/bench/cog.mjs
// [cells across, default 4000] [largest grid to stream, cells across: 20000 needs 5 GB of disk and two minutes].
import { execFileSync, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs';
import { availableParallelism, tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { promisify } from 'node:util';
import { deflate as zlib } from 'node:zlib';
import { deflate } from '../../dist/cli/deflate.js';
import { writeCogFile } from '../../dist/cli/rasterFiles.js';
import { crs } from '../../dist/src/geodesy/crs.js';
import { Random } from '../../dist/src/numerics/random.js';
import { checkCog } from '../../dist/src/raster/checkCog.js';
import { readGeoTiff } from '../../dist/src/raster/readGeoTiff.js';

const ROUNDS = 5;
const LEVEL = 6;
const FRAME = crs(26917);
const MEGABYTE = 1e6;

/** Rows of a made field: broad waves on a level, with noise, in nT; with gaps, a third of the rows have no value. Rows are made anew at each call, in the same array. */
function field(width, seed, { noise = 1, level = 0, gaps = false }) {
  const random = new Random(seed);
  const rows = 512;
  const table = Float64Array.from({ length: 1 << 16 }, () => noise * random.normal());
  const values = new Float32Array(width * rows);
  return (first, count) => {
    for (let row = 0; row < count; row++) {
      const y = first + row;
      let at = (Math.imul(y, 40503) >>> 0) % table.length;
      for (let x = 0; x < width; x++) {
        at = (at + 4099 + (x & 7)) & 65535;
        const broad = level + 40 * Math.sin(x / 170) * Math.cos(y / 230);
        values[row * width + x] = gaps && y % 40 > 26 ? NaN : broad + table[at] + table[(at * 3 + x) & 65535];
      }
    }
    return values.subarray(0, width * count);
  };
}

const best = (times) => Math.min(...times);
const mean = (times) => times.reduce((a, b) => a + b, 0) / times.length;

async function timed(run) {
  const start = performance.now();
  await run();
  return performance.now() - start;
}

/** zlib as it is: what the trial of runs saves, and what it costs in size. */
const plainDeflate = (bytes) => promisify(zlib)(bytes, { level: LEVEL, memLevel: 9, chunkSize: bytes.length + 4096 });

function firstDifference(a, b) {
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i] && !(Number.isNaN(a[i]) && Number.isNaN(b[i]))) return i;
  return -1;
}

async function sideBySide(cells, name, shape) {
  const folder = mkdtempSync(join(tmpdir(), 'bench-cog-'));
  try {
    const threads = availableParallelism();
    const values = new Float32Array(cells * cells);
    const rows = field(cells, 7, shape);
    for (let first = 0; first < cells; first += 512) values.set(rows(first, Math.min(512, cells - first)), first * cells);
    const source = { width: cells, height: cells, west: 5e5, north: 4.4e6, cellM: 1, readRows: (first, count) => values.subarray(first * cells, (first + count) * cells) };
    const [input, ours, plain, theirs] = ['input', 'ours', 'plain', 'theirs'].map((file) => join(folder, `${file}.tif`));
    const write = (path, compress) => writeCogFile(source, path, { crs: FRAME, deflate: compress });
    const gdal = spawnSync('gdal_translate', ['--version']).status === 0;
    // A plain tiled GeoTIFF for GDAL to start from, as we start from memory; it stays in the system's cache.
    if (gdal) {
      await write(ours, deflate);
      execFileSync('gdal_translate', ['-q', '-of', 'GTiff', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=512', '-co', 'BLOCKYSIZE=512', ours, input]);
    }
    const times = { ours: [], plain: [], theirs: [] };
    // Turn by turn, so that a busy moment of the machine does not fall on one side alone.
    for (let round = 0; round <= ROUNDS; round++) {
      const turn = {
        ours: await timed(() => write(ours, deflate)),
        plain: await timed(() => write(plain, plainDeflate)),
        theirs: gdal ? await timed(() => execFileSync('gdal_translate', ['-q', '-of', 'COG', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=YES', '-co', `LEVEL=${LEVEL}`, '-co', `NUM_THREADS=${threads}`, '-co', 'BLOCKSIZE=512', '-co', 'RESAMPLING=AVERAGE', input, theirs])) : 0,
      };
      if (round > 0) for (const side of Object.keys(times)) times[side].push(turn[side]);
    }
    const faults = checkCog(readFileSync(ours));
    if (faults.length > 0) throw new Error(faults.join('\n'));
    const size = (path) => statSync(path).size;
    const raw = cells * cells * 4;
    console.log(`COG of ${cells} × ${cells} cells, ${name}, DEFLATE level ${LEVEL}, predictor 3, ${threads} threads, best and mean of ${ROUNDS} rounds`);
    console.log(`  ours: ${best(times.ours).toFixed(0)} / ${mean(times.ours).toFixed(0)} ms (${(raw / 1e3 / best(times.ours)).toFixed(0)} MB/s), ${(size(ours) / MEGABYTE).toFixed(1)} MB`);
    console.log(`  ours, zlib without the trial of runs: ${best(times.plain).toFixed(0)} / ${mean(times.plain).toFixed(0)} ms, ${(size(plain) / MEGABYTE).toFixed(1)} MB`);
    if (!gdal) {
      console.log('  gdal_translate: not installed, no ratio');
      return;
    }
    const back = await readGeoTiff(readFileSync(theirs));
    const mine = await readGeoTiff(readFileSync(ours));
    if (firstDifference(mine.grid.values, back.grid.values) !== -1) throw new Error('The two files hold different values');
    console.log(`  gdal_translate -of COG: ${best(times.theirs).toFixed(0)} / ${mean(times.theirs).toFixed(0)} ms, ${(size(theirs) / MEGABYTE).toFixed(1)} MB; `
      + `ours takes ${(best(times.ours) / best(times.theirs)).toFixed(2)} of its best time, ${(mean(times.ours) / mean(times.theirs)).toFixed(2)} of its mean, and ${(size(ours) / size(theirs)).toFixed(3)} of its size`);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** Linux counts a new program's peak anew only here; the peak of getrusage is at least that of the program that started it. */
function peakMegabytes() {
  const status = existsSync('/proc/self/status') ? readFileSync('/proc/self/status', 'utf8') : '';
  const kilobytes = Number(/^VmHWM:\s+(\d+)/m.exec(status)?.[1] ?? process.resourceUsage().maxRSS);
  return (kilobytes * 1024) / MEGABYTE;
}

/** A grid that is never in memory as a whole. Peak memory is the process's, so each size has a process of its own. */
async function streamed(cells) {
  const folder = mkdtempSync(join(tmpdir(), 'bench-cog-'));
  try {
    const path = join(folder, 'large.tif');
    const rows = field(cells, 7, {});
    const ms = await timed(() => writeCogFile({ width: cells, height: cells, west: 5e5, north: 4.4e6, cellM: 1, readRows: rows }, path, { crs: FRAME, deflate }));
    console.log(`COG of ${cells} × ${cells} cells, streamed: ${(ms / 1000).toFixed(1)} s, ${(statSync(path).size / MEGABYTE).toFixed(0)} MB, peak resident ${peakMegabytes().toFixed(0)} MB; the grid alone is ${((cells * cells * 4) / MEGABYTE).toFixed(0)} MB`);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** What `npm run bench` shows. */
export async function benchCog(cells = 4000, largest = 8000) {
  await sideBySide(cells, 'noise of 1 nT', {});
  await sideBySide(cells, 'noise of 1 nT, a third in gaps', { gaps: true });
  await sideBySide(cells, 'noise of 0.1 nT on 50,000 nT', { noise: 0.1, level: 50_000 });
  for (let side = 2000; side <= largest; side = side < largest ? Math.min(side * 2, largest) : largest + 1) {
    execFileSync(process.execPath, [import.meta.filename, 'streamed', String(side)], { stdio: 'inherit' });
  }
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  const [first, second] = process.argv.slice(2);
  if (first === 'streamed') await streamed(Number(second));
  else await benchCog(first === undefined ? undefined : Number(first), second === undefined ? undefined : Number(second));
}
