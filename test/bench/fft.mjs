// Times the two-dimensional real FFT against SciPy's on one thread, where Debian's python3-scipy is installed. Both are
// shown to give the same numbers first; then they take turns, so that both meet the same machine. Build first.
// Usage: node test/bench/fft.mjs [sizes, default 1024 2048 4096]
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { inverseRealFft2, realFft2, spectrumStride } from '../../dist/src/numerics/fft2.js';
import { Random } from '../../dist/src/numerics/random.js';

const PYTHON = '/usr/bin/python3';
const TURNS = 5;
const ROUNDS_A_TURN = 3;

/** Times forward and backward; with a second path it writes the spectrum there instead. */
const SCIPY = `
import sys, time, numpy as np, scipy.fft as fft
n = int(sys.argv[1]); values = np.fromfile(sys.argv[2]).reshape(n, n)
spectrum = fft.rfft2(values, workers=1)
if len(sys.argv) > 3: spectrum.tofile(sys.argv[3]); sys.exit()
fft.irfft2(spectrum, workers=1)
times = []
for inverse in (False, True):
    best = 1e9
    for k in range(${ROUNDS_A_TURN}):
        start = time.perf_counter()
        fft.irfft2(spectrum, workers=1) if inverse else fft.rfft2(values, workers=1)
        best = min(best, time.perf_counter() - start)
    times.append(best * 1e3)
print(*times)
`;
const python = (...args) => spawnSync(PYTHON, ['-c', SCIPY, ...args], { encoding: 'utf8' });
const hasScipy = spawnSync(PYTHON, ['-c', 'import scipy.fft']).status === 0;
if (!hasScipy) console.log('SciPy is not installed: ours alone');

const sizes = process.argv.length > 2 ? process.argv.slice(2).map(Number) : [1024, 2048, 4096];
for (const n of sizes) {
  const random = new Random(n);
  const stride = spectrumStride(n);
  const values = new Float64Array(n * n).map(() => random.uniform() - 0.5);
  const field = new Float64Array(n * stride);
  for (let j = 0; j < n; j++) field.set(values.subarray(j * n, (j + 1) * n), j * stride);
  const folder = mkdtempSync(join(tmpdir(), 'bench-'));
  try {
    const input = join(folder, 'values');
    writeFileSync(input, values);
    const ours = { forward: Infinity, backward: Infinity, anew: Infinity };
    const theirs = { forward: Infinity, backward: Infinity };
    const time = (name, run) => {
      const start = performance.now();
      run(field, { width: n, height: n });
      ours[name] = Math.min(ours[name], performance.now() - start);
    };
    if (hasScipy) {
      const output = join(folder, 'spectrum');
      python(String(n), input, output);
      const bytes = readFileSync(output);
      const wanted = new Float64Array(bytes.buffer, bytes.byteOffset, n * stride);
      const copy = field.slice();
      realFft2(copy, { width: n, height: n });
      let worst = 0, peak = 0;
      for (let k = 0; k < copy.length; k++) {
        worst = Math.max(worst, Math.abs(copy[k] - wanted[k]));
        peak = Math.max(peak, Math.abs(wanted[k]));
      }
      if (!(worst < 1e-9 * peak)) throw new Error(`the spectra differ by ${worst / peak} of the peak`);
      console.log(`${n} × ${n}: equal to SciPy's within ${(worst / peak).toExponential(1)} of the peak`);
    }
    // SciPy lays its result out anew each time. Ours works in place; with a field made anew from the values it does as much.
    const anew = () => {
      const start = performance.now();
      const made = new Float64Array(n * stride);
      for (let j = 0; j < n; j++) made.set(values.subarray(j * n, (j + 1) * n), j * stride);
      realFft2(made, { width: n, height: n });
      ours.anew = Math.min(ours.anew, performance.now() - start);
    };
    for (let turn = 0; turn < TURNS; turn++) {
      for (let round = 0; round < ROUNDS_A_TURN; round++) {
        time('forward', realFft2);
        time('backward', inverseRealFft2);
        anew();
      }
      if (!hasScipy) continue;
      const [forward, backward] = python(String(n), input).stdout.split(' ').map(Number);
      theirs.forward = Math.min(theirs.forward, forward);
      theirs.backward = Math.min(theirs.backward, backward);
    }
    for (const name of ['forward', 'backward']) {
      const against = hasScipy ? `, SciPy ${theirs[name].toFixed(1)} ms: ${(ours[name] / theirs[name]).toFixed(2)} ×` : '';
      // Physical floor: every number is read and written once by the rows and once by the columns.
      const floorGB = (4 * 8 * n * stride) / 1e9;
      const flops = 2.5 * n * n * Math.log2(n * n);
      console.log(`  ${name}: ${ours[name].toFixed(1)} ms${against}; ${(floorGB / (ours[name] / 1e3)).toFixed(1)} GB/s and ${(flops / ours[name] / 1e6).toFixed(2)} GFlop/s of the least that it takes`);
    }
    console.log(`  forward with a new field: ${ours.anew.toFixed(1)} ms${hasScipy ? `: ${(ours.anew / theirs.forward).toFixed(2)} ×` : ''}`);
  } finally {
    rmSync(folder, { recursive: true });
  }
}
