/** Decimals that an angle is written with at most, as many as are read. */
const MOST_DECIMALS = 20;
const AGREE = 1e-6;

/** Degrees, without sign, as their last digit has them: to 1/3600 `39°22'30"`, to 1/600 `39°22.5'`, to 0.0001 `39.3750`. */
export function formatAngle(deg: number, resolutionDeg: number): string {
  for (const [parts, perDegree] of [[1, 1], [2, 60], [3, 3600]] as const) {
    const steps = 1 / (resolutionDeg * perDegree);
    const decimals = Math.round(Math.log10(steps));
    if (decimals < 0 || decimals > MOST_DECIMALS || Math.abs(steps / 10 ** decimals - 1) > AGREE) continue;
    if (parts === 1) return deg.toFixed(decimals);
    // Whole steps of the last digit, so that 59.9996" never comes out as 60".
    const count = Math.round(deg / resolutionDeg);
    const perMinute = (perDegree === 60 ? 1 : 60) * 10 ** decimals;
    const minutes = Math.floor(count / perMinute);
    const last = (each: number): string => (each / 10 ** decimals).toFixed(decimals).padStart(decimals === 0 ? 2 : decimals + 3, '0');
    if (parts === 2) return `${Math.floor(count / (60 * 10 ** decimals))}°${last(count % (60 * 10 ** decimals))}'`;
    return `${Math.floor(minutes / 60)}°${String(minutes % 60).padStart(2, '0')}'${last(count % perMinute)}"`;
  }
  throw new RangeError(`${resolutionDeg} degrees is the worth of no digit`);
}
