import { LENGTH_UNIT_M, type Length } from './lengths.js';

type UnitName = keyof typeof LENGTH_UNIT_M;
const UNITS: readonly UnitName[] = ['ft', 'rod', 'chain', 'link', 'm', 'mi', 'yd', 'in'];
const WORDS: Readonly<Record<UnitName, string>> = { ft: 'ft', rod: 'rods', chain: 'chains', link: 'links', m: 'm', mi: 'miles', yd: 'yards', in: 'inches' };
/** Units that a smaller one may stand behind: 19 rods 5 ft is no whole number of feet. */
const LARGER: readonly UnitName[] = ['rod', 'chain', 'mi', 'yd', 'ft', 'link'];
const BOTTOMS = [2, 3, 4, 8, 16];
/** Decimals that a length is written with at most; a micrometre. */
const MOST_DECIMALS = 6;
/** Conversions to metres and back agree to this. */
const AGREE = 1e-9;

/** A length in the unit that its last digit is a decimal or a fraction of: 201.168 m to 0.3048 m is `660 ft`, to 5.03 m `40 rods`. */
export function formatLength({ m, resolutionM }: Length): string {
  for (const unit of UNITS) {
    const number = numberIn(m / LENGTH_UNIT_M[unit], resolutionM / LENGTH_UNIT_M[unit]);
    if (number !== null) return `${number} ${WORDS[unit]}`;
  }
  for (const unit of UNITS) {
    for (const larger of LARGER) {
      const whole = Math.floor(m / LENGTH_UNIT_M[larger] + AGREE);
      if (whole === 0 || LENGTH_UNIT_M[larger] <= LENGTH_UNIT_M[unit] || unit === 'm') continue;
      const rest = Math.max(0, m - whole * LENGTH_UNIT_M[larger]);
      const number = numberIn(rest / LENGTH_UNIT_M[unit], resolutionM / LENGTH_UNIT_M[unit]);
      if (number !== null) return `${whole} ${WORDS[larger]} ${number} ${WORDS[unit]}`;
    }
  }
  throw new RangeError(`a length of ${m} m to ${resolutionM} m is in no unit of land records`);
}

function numberIn(value: number, resolution: number): string | null {
  for (let decimals = 0; decimals <= MOST_DECIMALS; decimals++) {
    if (near(resolution, Number(`1e-${decimals}`))) {
      const text = value.toFixed(decimals);
      return near(Number(text), value) ? text : null;
    }
  }
  const bottom = BOTTOMS.find((each) => near(resolution * each, 1));
  if (bottom === undefined) return null;
  const whole = Math.floor(value + AGREE);
  const top = Math.round((value - whole) * bottom);
  if (!near(whole + top / bottom, value)) return null;
  // A fraction that fills a unit keeps its resolution only while it is written, and 0/4 is no fraction.
  if (top === 0) return null;
  return whole === 0 ? `${top}/${bottom}` : `${whole} ${top}/${bottom}`;
}

const near = (a: number, b: number): boolean => Math.abs(a - b) <= AGREE * Math.max(1, Math.abs(b));
