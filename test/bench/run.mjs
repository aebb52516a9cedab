// Times the gridding on made readings, and GDAL's gdal_grid on the same ones where it is installed. Build first (npm run
// bench does). Usage: node test/bench/run.mjs [largest number of readings, default 100000]
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { gridReadings } from '../../dist/src/grid/gridReadings.js';
import { estimateLineSpacing } from '../../dist/src/grid/estimateLineSpacing.js';
import { linearOnTriangles } from '../../dist/src/grid/linearOnTriangles.js';
import { Random } from '../../dist/src/numerics/random.js';
import { benchCog } from './cog.mjs';

const ROUNDS = 3;
const SPACING_M = 8;

/** A walked square: lines 8 m apart that wander, poles 2 to 8 m below the sensor, noise of 1 nT. */
function walked(readings, cells) {
  const random = new Random(readings);
  const side = cells;
  const lines = Math.floor(side / SPACING_M);
  const perLine = Math.floor(readings / lines);
  const poles = Array.from({ length: 40 }, () => [side * random.uniform(), side * random.uniform(), 2 + 6 * random.uniform(), 4e4 * random.normal()]);
  const count = lines * perLine;
  const x = new Float64Array(count), y = new Float64Array(count), value = new Float64Array(count), line = new Int32Array(count);
  for (let l = 0, n = 0; l < lines; l++) {
    let off = 0;
    for (let k = 0; k < perLine; k++, n++) {
      off = 0.999 * off + 0.02 * random.normal();
      x[n] = (side * (k + 0.5)) / perLine;
      y[n] = (l + 0.5) * SPACING_M + off;
      line[n] = l;
      value[n] = random.normal() + 0.05 * x[n];
      for (const [px, py, depth, strength] of poles) {
        const r2 = (x[n] - px) ** 2 + (y[n] - py) ** 2 + depth * depth;
        if (r2 < 1e4) value[n] += (strength * depth) / (r2 * Math.sqrt(r2));
      }
    }
  }
  return { x, y, value, line };
}

function timed(run) {
  run();
  const times = [];
  let result;
  for (let round = 0; round < ROUNDS; round++) {
    const start = performance.now();
    result = run();
    times.push(performance.now() - start);
  }
  return { result, min: Math.min(...times), mean: times.reduce((a, b) => a + b, 0) / ROUNDS };
}

/** GDAL's own gridding of the same readings; null where it is not installed. One round: it takes long. */
function gdal(samples, grid, algorithm) {
  if (spawnSync('gdal_grid', ['--version']).status !== 0) return null;
  const folder = mkdtempSync(join(tmpdir(), 'bench-'));
  try {
    const rows = ['x,y,z'];
    for (let n = 0; n < samples.x.length; n++) rows.push(`${samples.x[n]},${samples.y[n]},${samples.value[n]}`);
    writeFileSync(join(folder, 'p.csv'), rows.join('\n'));
    writeFileSync(join(folder, 'p.vrt'), '<OGRVRTDataSource><OGRVRTLayer name="p"><SrcDataSource relativeToVRT="1">p.csv</SrcDataSource><GeometryType>wkbPoint</GeometryType><GeometryField encoding="PointFromColumns" x="x" y="y" z="z"/></OGRVRTLayer></OGRVRTDataSource>');
    const { west, north, width, height, cellM } = grid;
    const args = ['-q', '-a', algorithm, '-txe', west, west + width * cellM, '-tye', north, north - height * cellM, '-outsize', width, height, '-of', 'ENVI', '-ot', 'Float32', join(folder, 'p.vrt'), join(folder, 'out.bin')].map(String);
    const start = performance.now();
    execFileSync('gdal_grid', args);
    const ms = performance.now() - start;
    const reading = performance.now();
    // What GDAL spends on reading the text is not gridding: the same file read alone, taken off.
    execFileSync('ogrinfo', ['-q', '-ro', '-al', '-so', join(folder, 'p.vrt')], { stdio: 'ignore' });
    const readMs = performance.now() - reading;
    if (statSync(join(folder, 'out.bin')).size !== width * height * 4) throw new Error('gdal_grid wrote another size');
    const bytes = readFileSync(join(folder, 'out.bin'));
    return { ms: ms - readMs, values: new Float32Array(bytes.buffer, bytes.byteOffset, width * height) };
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** Both sides are shown to grid the same field before their times are set side by side. */
function medianDifference(a, b) {
  const differences = [];
  for (let k = 0; k < a.length; k += 7) if (Number.isFinite(a[k]) && Number.isFinite(b[k]) && b[k] !== 0) differences.push(Math.abs(a[k] - b[k]));
  differences.sort((p, q) => p - q);
  return differences[differences.length >> 1];
}

const largest = Number(process.argv[2] ?? 100_000);
for (const [readings, cells] of [[10_000, 300], [100_000, 1000], [1_000_000, 2000]].filter(([count]) => count <= largest)) {
  const samples = walked(readings, cells);
  const options = { cellM: 1, spacingM: SPACING_M, bounds: { west: 0, south: 0, east: cells, north: cells } };
  const { result, min, mean } = timed(() => gridReadings(samples, options));
  console.log(`${samples.x.length} readings to ${result.width} × ${result.height} cells`);
  console.log(`  minimum curvature in tension: min ${min.toFixed(0)} ms, mean ${mean.toFixed(0)} ms; ${result.iterations} steps, left ${result.remainingShare.toExponential(1)} of the range`);
  const spacing = timed(() => estimateLineSpacing(samples));
  console.log(`  line spacing: min ${spacing.min.toFixed(0)} ms (${spacing.result.toFixed(2)} m)`);
  const triangles = timed(() => linearOnTriangles(samples, result));
  console.log(`  linear on triangles: min ${triangles.min.toFixed(0)} ms`);
  for (const algorithm of ['linear:radius=-1:nodata=0', `invdistnn:power=2:radius=${SPACING_M}:max_points=12:nodata=0`]) {
    const other = gdal(samples, result, algorithm);
    if (!other) {
      console.log('  gdal_grid: not installed');
      break;
    }
    console.log(`  gdal_grid ${algorithm.split(':')[0]}: ${other.ms.toFixed(0)} ms (its reading of the file taken off); ours takes ${(min / other.ms).toFixed(3)} of it; median difference ${medianDifference(result.values, other.values).toFixed(2)} nT`);
  }
}

await benchCog();
