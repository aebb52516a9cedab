// Times gridding from a CSV file to a written COG, and GDAL's gdal_grid on the same file where it is installed, turn by
// turn in one run; then the growth from 0.1 to 20 million readings with peak memory. Build first.
// Usage: node test/bench/grid.mjs [largest number of readings, default 5 million; 20 million to 20,000² cells takes
// several minutes and 3 GB of disk]
import { execFileSync, spawnSync } from 'node:child_process';
import { closeSync, mkdtempSync, openSync, readFileSync, rmSync, statSync, writeFileSync, writeSync } from 'node:fs';
import { availableParallelism, tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { Random } from '../../dist/src/numerics/random.js';
import { readGeoTiff } from '../../dist/src/raster/readGeoTiff.js';
import { GRID_DEFAULTS } from '../../dist/src/grid/gridOptions.js';
import { gridReadings } from '../../dist/src/grid/gridReadings.js';
import { gridTiled } from '../../dist/src/grid/gridTiled.js';

const ROUNDS = 3;
/** One pole to so much ground, square metres; its field is made up to this far from it. */
const GROUND_PER_POLE = 1e5;
const POLE_REACH = 60;

/** A walked square of `side` metres: lines that wander, readings evenly along them, poles 2 to 8 m below the sensor, a slope, noise of 1 nT. */
function* walked(readings, side, lines) {
  const random = new Random(readings);
  const spacing = side / lines;
  const perLine = Math.floor(readings / lines);
  const squares = Math.ceil(side / POLE_REACH);
  const near = new Map();
  for (let p = 0; p < Math.round((side * side) / GROUND_PER_POLE); p++) {
    const pole = [side * random.uniform(), side * random.uniform(), 2 + 6 * random.uniform(), 1e4 * random.normal()];
    const [i, j] = [Math.floor(pole[0] / POLE_REACH), Math.floor(pole[1] / POLE_REACH)];
    for (let b = -1; b <= 1; b++) for (let a = -1; a <= 1; a++) {
      const key = (j + b) * squares + i + a;
      if (!near.has(key)) near.set(key, []);
      near.get(key).push(pole);
    }
  }
  for (let l = 0; l < lines; l++) {
    let off = 0;
    for (let k = 0; k < perLine; k++) {
      off = 0.999 * off + 0.02 * random.normal();
      const x = (side * (k + 0.5)) / perLine;
      const y = (l + 0.5) * spacing + off;
      let value = random.normal() + 0.01 * x;
      for (const [px, py, depth, strength] of near.get(Math.floor(y / POLE_REACH) * squares + Math.floor(x / POLE_REACH)) ?? []) {
        const r2 = (x - px) ** 2 + (y - py) ** 2 + depth * depth;
        if (r2 < POLE_REACH ** 2) value += (strength * depth) / (r2 * Math.sqrt(r2));
      }
      yield [x, y, value];
    }
  }
}

function writeReadings(path, rows) {
  const file = openSync(path, 'w');
  let text = 'x,y,z\n';
  for (const [x, y, value] of rows) {
    text += `${x.toFixed(3)},${y.toFixed(3)},${value.toFixed(2)}\n`;
    if (text.length > 1 << 20) {
      writeSync(file, text);
      text = '';
    }
  }
  writeSync(file, text);
  closeSync(file);
}

function ours(folder, { cells, spacing, threads = [] }) {
  const start = performance.now();
  const printed = execFileSync(process.execPath, [join(import.meta.dirname, 'gridFile.mjs'), join(folder, 'p.csv'), join(folder, 'ours.tif'), cells, spacing, ...threads].map(String), { encoding: 'utf8' });
  return { processMs: performance.now() - start, ...JSON.parse(printed) };
}

function gdal(folder, algorithm, cells) {
  writeFileSync(join(folder, 'p.vrt'), '<OGRVRTDataSource><OGRVRTLayer name="p"><SrcDataSource relativeToVRT="1">p.csv</SrcDataSource><GeometryType>wkbPoint</GeometryType><GeometryField encoding="PointFromColumns" x="x" y="y" z="z"/></OGRVRTLayer></OGRVRTDataSource>');
  const path = join(folder, 'theirs.tif');
  rmSync(path, { force: true });
  const start = performance.now();
  execFileSync('gdal_grid', ['-q', '-a', algorithm, '-txe', 0, cells, '-tye', cells, 0, '-outsize', cells, cells, '-a_srs', 'EPSG:26917', '-of', 'GTiff', '-ot', 'Float32', join(folder, 'p.vrt'), path].map(String));
  const processMs = performance.now() - start;
  // What GDAL spends on reading the text, to tell its gridding from it.
  const reading = performance.now();
  execFileSync('ogrinfo', ['-q', '-ro', '-al', '-so', join(folder, 'p.vrt')], { stdio: 'ignore' });
  return { processMs, gridMs: processMs - (performance.now() - reading), path };
}

/** Both sides are shown to grid the same field before their times are set side by side. */
async function medianDifference(a, b) {
  const [mine, theirs] = await Promise.all([a, b].map(async (path) => (await readGeoTiff(readFileSync(path))).grid.values));
  const differences = [];
  for (let k = 0; k < mine.length; k += 7) if (Number.isFinite(mine[k]) && Number.isFinite(theirs[k]) && theirs[k] !== 0) differences.push(Math.abs(mine[k] - theirs[k]));
  return differences.toSorted((p, q) => p - q)[differences.length >> 1];
}

const best = (runs, key) => Math.min(...runs.map((run) => run[key]));
const seconds = (ms) => (ms / 1000).toFixed(2);

async function sideBySide(readings, cells, lines) {
  const folder = mkdtempSync(join(tmpdir(), 'bench-grid-'));
  try {
    const spacing = cells / lines;
    writeReadings(join(folder, 'p.csv'), walked(readings, cells, lines));
    // invdistnn spends its time on finding neighbours: how long depends on the radius; two lines are the least that bridges a gap.
    const nearest = (radius) => [`invdistnn within ${radius} m`, `invdistnn:power=2:radius=${radius}:max_points=12:nodata=0`];
    const others = spawnSync('gdal_grid', ['--version']).status === 0 ? Object.fromEntries([['linear', 'linear:radius=-1:nodata=0'], nearest(2 * spacing), nearest(3.5 * spacing)]) : {};
    const runs = { ours: [], ...Object.fromEntries(Object.keys(others).map((name) => [name, []])) };
    const differences = {};
    // Turn by turn, so that a busy moment of the machine does not fall on one side alone.
    for (let round = 0; round < ROUNDS; round++) {
      runs.ours.push(ours(folder, { cells, spacing }));
      for (const [name, algorithm] of Object.entries(others)) {
        const run = gdal(folder, algorithm, cells);
        runs[name].push(run);
        if (round > 0) continue;
        const packed = join(folder, 'packed.tif');
        execFileSync('gdal_translate', ['-q', '-co', 'COMPRESS=DEFLATE', run.path, packed]);
        differences[name] = await medianDifference(join(folder, 'ours.tif'), packed);
      }
    }
    const first = runs.ours[0];
    console.log(`${first.rows} readings on ${lines} lines to ${cells} × ${cells} cells, CSV to GeoTIFF, best of ${ROUNDS} rounds turn by turn`);
    const floor = floorMs(cells, first.iterations);
    console.log(`  ours: ${seconds(best(runs.ours, 'processMs'))} s as a process (reading ${seconds(best(runs.ours, 'readMs'))}, gridding ${seconds(best(runs.ours, 'gridMs'))}, the rest of writing ${seconds(best(runs.ours, 'restMs'))}), processor ${seconds(best(runs.ours, 'cpuMs'))} s, peak ${first.peakMB.toFixed(0)} MB; ${first.iterations} cycles, left ${first.remainingShare.toExponential(1)} of the range`);
    console.log(`  floor: ${(statSync(join(folder, 'p.csv')).size / 1e6).toFixed(0)} MB of text in, ${(statSync(join(folder, 'ours.tif')).size / 1e6).toFixed(0)} MB of file out; one sweep of the 13-point operator takes ${floor.sweepMs.toFixed(0)} ms, the sweeps of ${first.iterations} cycles on all grids ${seconds(floor.totalMs)} s on ${availableParallelism()} threads; gridding takes ${(best(runs.ours, 'gridMs') / floor.totalMs).toFixed(1)} of that`);
    if (Object.keys(others).length === 0) console.log('  gdal_grid: not installed, no ratio');
    for (const name of Object.keys(others)) {
      console.log(`  gdal_grid ${name}: ${seconds(best(runs[name], 'processMs'))} s (gridding ${seconds(best(runs[name], 'gridMs'))}); ours takes ${(best(runs.ours, 'processMs') / best(runs[name], 'processMs')).toFixed(3)} of it, gridding alone ${(best(runs.ours, 'gridMs') / best(runs[name], 'gridMs')).toFixed(3)}; median difference ${differences[name].toFixed(2)} nT`);
    }
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** Sweeps of a cycle on the finest grid, and all grids against the finest (1 + 1/4 + 1/16 + …). */
const SWEEPS_A_CYCLE = 6;
const ALL_GRIDS = 4 / 3;

/** What the sweeps alone take: one, timed here as a plain loop over as many cells on one thread, times their number. */
function floorMs(cells, cycles) {
  const z = Float64Array.from({ length: cells * cells }, (_, k) => Math.sin(k));
  const sweep = () => {
    for (let j = 2; j < cells - 2; j++) {
      for (let k = j * cells + 2; k < (j + 1) * cells - 2; k++) {
        z[k] += 0.065 * (8 * (z[k - 1] + z[k + 1] + z[k - cells] + z[k + cells]) - 2 * (z[k - cells - 1] + z[k - cells + 1] + z[k + cells - 1] + z[k + cells + 1])
          - (z[k - 2] + z[k + 2] + z[k - 2 * cells] + z[k + 2 * cells]) - 20 * z[k]);
      }
    }
  };
  sweep();
  const times = Array.from({ length: 3 }, () => {
    const start = performance.now();
    sweep();
    return performance.now() - start;
  });
  const sweepMs = Math.min(...times);
  return { sweepMs, totalMs: (sweepMs * SWEEPS_A_CYCLE * ALL_GRIDS * cycles) / availableParallelism() };
}

/** Lines five cells apart, as the cell is advised, one reading to twenty cells. */
function growth(largest) {
  let before = null;
  for (const readings of [1e5, 3e5, 1e6, 5e6, 2e7].filter((count) => count <= largest)) {
    const folder = mkdtempSync(join(tmpdir(), 'bench-grid-'));
    try {
      const cells = Math.round(Math.sqrt(readings * 20));
      const lines = Math.round(cells / 5);
      writeReadings(join(folder, 'p.csv'), walked(readings, cells, lines));
      const run = ours(folder, { cells, spacing: cells / lines });
      const perReading = run.cpuMs / (run.rows * Math.log(run.rows));
      console.log(`  ${run.rows} readings to ${cells} × ${cells} cells: ${seconds(run.processMs)} s, processor ${seconds(run.cpuMs)} s${before ? ` (${(perReading / before).toFixed(2)} of the size before, per n log n)` : ''}, peak ${run.peakMB.toFixed(0)} MB, file ${(statSync(join(folder, 'ours.tif')).size / 1e6).toFixed(0)} MB; ${run.iterations} cycles, left ${run.remainingShare.toExponential(1)} of a range of ${run.range.toFixed(0)} nT`);
      before = perReading;
    } finally {
      rmSync(folder, { recursive: true });
    }
  }
}

/** Largest difference between the grid in tiles and in one piece, both as they come. */
async function seams(cells, lines) {
  const rows = [...walked(Math.round((cells * cells) / 10), cells, lines)];
  const samples = { x: Float64Array.from(rows, ([x]) => x), y: Float64Array.from(rows, ([, y]) => y), value: Float64Array.from(rows, ([, , value]) => value) };
  // Two ponds that nobody walked, on a corner of four tiles and on a seam.
  const [middle, pond] = [cells / 4, 60];
  for (let n = 0; n < samples.x.length; n++) {
    if (Math.hypot(samples.x[n] - 1024, samples.y[n] - (cells - 1024)) < pond || Math.hypot(samples.x[n] - 1024, samples.y[n] - middle) < pond) samples.value[n] = NaN;
  }
  const options = { cellM: 1, spacingM: cells / lines, bounds: { west: 0, south: 0, east: cells, north: cells } };
  const { values: whole } = await gridReadings(samples, { ...options, tileCells: cells });
  const tiled = gridTiled(samples, options);
  let largest = 0;
  for (let first = 0; first < cells; first += 512) {
    const values = await tiled.readRows(first, Math.min(512, cells - first));
    for (let k = 0; k < values.length; k++) {
      const other = whole[first * cells + k];
      if (Number.isNaN(other) !== Number.isNaN(values[k])) throw new Error('tiles fill other cells');
      if (Math.abs(values[k] - other) > largest) largest = Math.abs(values[k] - other);
    }
  }
  console.log(`Tiles against the whole at ${cells} × ${cells} cells with two ponds: at most ${largest.toExponential(1)} nT apart, range ${tiled.range.toFixed(0)} nT, solved to ${GRID_DEFAULTS.tolerance} of it`);
}

/** What `npm run bench` shows. */
export async function benchGrid(largest = 5e6) {
  await sideBySide(100_000, 1000, 125);
  await sideBySide(1_000_000, 2000, 500);
  await seams(largest > 1e5 ? 4000 : 1000, largest > 1e5 ? 800 : 200);
  console.log('Growth, CSV to COG, lines five cells apart, one reading to twenty cells');
  growth(largest);
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await benchGrid(process.argv[2] === undefined ? undefined : Number(process.argv[2]));
