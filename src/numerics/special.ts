/**
 * Error function and the normal distribution, to double precision.
 * Source of erf: Cody (1969), Rational Chebyshev approximations for the error function, Math. Comp. 23.
 * Source of the quantile: Wichura (1988), Algorithm AS 241 (PPND16), Applied Statistics 37.
 */
const ERF_NUM = [0.18577770618460315, 3.1611237438705655, 113.86415415105016, 377.485237685302, 3209.3775891384694];
const ERF_DEN = [1, 23.601290952344122, 244.02463793444417, 1282.6165260773723, 2844.236833439171];
const ERFC_NUM = [
  2.1531153547440383e-8, 0.5641884969886701, 8.883149794388377, 66.11919063714163, 298.6351381974001,
  881.952221241769, 1712.0476126340707, 2051.0783778260716, 1230.3393547979972,
];
const ERFC_DEN = [
  1, 15.744926110709835, 117.6939508913125, 537.1811018620099, 1621.3895745666903,
  3290.7992357334597, 4362.619090143247, 3439.3676741437216, 1230.3393548037495,
];
const TAIL_NUM = [
  0.016315387137302097, 0.30532663496123236, 0.36034489994980445, 0.12578172611122926, 0.016083785148742275,
  0.0006587491615298378,
];
const TAIL_DEN = [
  1, 2.568520192289822, 1.8729528499234673, 0.5279051029514285, 0.06051834131244132, 0.0023352049762686918,
];

/** Where Cody's three approximations meet. */
const SMALL = 0.46875;
const LARGE = 4;

/** Error function. NaN in, NaN out. */
export function erf(x: number): number {
  const size = Math.abs(x);
  if (size <= SMALL) return (x * polynomial(ERF_NUM, x * x)) / polynomial(ERF_DEN, x * x);
  return Math.sign(x) * (1 - erfcPositive(size));
}

/** 1 − erf(x), accurate in the tail. */
export function erfc(x: number): number {
  if (Math.abs(x) <= SMALL) return 1 - erf(x);
  return x > 0 ? erfcPositive(x) : 2 - erfcPositive(-x);
}

/** Chance that a standard normal variable is at most x. */
export function normalCdf(x: number): number {
  return 0.5 * erfc(-x * Math.SQRT1_2);
}

const INV_SQRT_2PI = 1 / Math.sqrt(2 * Math.PI);

/** Density of the standard normal variable. */
export function normalPdf(x: number): number {
  return INV_SQRT_2PI * Math.exp(-0.5 * x * x);
}

const CENTRE_NUM = [
  2509.0809287301227, 33430.57558358813, 67265.7709270087, 45921.95393154987, 13731.69376550946,
  1971.5909503065513, 133.14166789178438, 3.3871328727963665,
];
const CENTRE_DEN = [
  5226.495278852854, 28729.085735721943, 39307.89580009271, 21213.794301586597, 5394.196021424751,
  687.1870074920579, 42.31333070160091, 1,
];
const MIDDLE_NUM = [
  0.0007745450142783414, 0.022723844989269184, 0.2417807251774506, 1.2704582524523684, 3.6478483247632045,
  5.769497221460691, 4.630337846156546, 1.4234371107496835,
];
const MIDDLE_DEN = [
  1.0507500716444169e-9, 0.0005475938084995345, 0.015198666563616457, 0.14810397642748008,
  0.6897673349851, 1.6763848301838038, 2.053191626637759, 1,
];
const FAR_NUM = [
  2.0103343992922881e-7, 2.7115555687434876e-5, 0.0012426609473880784, 0.026532189526576124,
  0.29656057182850487, 1.7848265399172913, 5.463784911164114, 6.657904643501103,
];
const FAR_DEN = [
  2.0442631033899397e-15, 1.421511758316446e-7, 1.8463183175100548e-5, 0.0007868691311456133,
  0.014875361290850615, 0.1369298809227358, 0.599832206555888, 1,
];

/** The x with normalCdf(x) = p; −∞ and ∞ at 0 and 1; NaN outside [0, 1]. */
export function normalQuantile(p: number): number {
  if (!(p >= 0 && p <= 1)) return NaN;
  if (p === 0) return -Infinity;
  if (p === 1) return Infinity;
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    return (q * polynomial(CENTRE_NUM, r)) / polynomial(CENTRE_DEN, r);
  }
  const r = Math.sqrt(-Math.log(q < 0 ? p : 1 - p));
  const size = r <= 5
    ? polynomial(MIDDLE_NUM, r - 1.6) / polynomial(MIDDLE_DEN, r - 1.6)
    : polynomial(FAR_NUM, r - 5) / polynomial(FAR_DEN, r - 5);
  return q < 0 ? -size : size;
}

/** x > 0.46875. */
function erfcPositive(x: number): number {
  if (Number.isNaN(x)) return NaN;
  // exp(−x²) in two factors, so that the rounding of x² does not spoil the far tail.
  const coarse = Math.trunc(x * 16) / 16;
  const scale = Math.exp(-coarse * coarse) * Math.exp(-(x - coarse) * (x + coarse));
  if (x <= LARGE) return (scale * polynomial(ERFC_NUM, x)) / polynomial(ERFC_DEN, x);
  // Past 27 the result underflows, and infinity would give 0 · ∞.
  if (x > 27) return 0;
  const inverse = 1 / (x * x);
  const correction = (inverse * polynomial(TAIL_NUM, inverse)) / polynomial(TAIL_DEN, inverse);
  return (scale * (1 / Math.sqrt(Math.PI) - correction)) / x;
}

/** Horner's scheme, highest power first. */
function polynomial(coefficients: readonly number[], x: number): number {
  let sum = 0;
  for (const c of coefficients) sum = sum * x + c;
  return sum;
}
