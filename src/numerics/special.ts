/**
 * Error function and the normal distribution, to double precision.
 * Source of erf: Cody (1969), Rational Chebyshev approximations for the error function, Math. Comp. 23.
 * Source of the quantile: Wichura (1988), Algorithm AS 241 (PPND16), Applied Statistics 37.
 */
const ERF_NUM = [1.85777706184603153e-1, 3.16112374387056560, 1.13864154151050156e2, 3.77485237685302021e2, 3.20937758913846947e3];
const ERF_DEN = [1, 2.36012909523441209e1, 2.44024637934444173e2, 1.28261652607737228e3, 2.84423683343917062e3];
const ERFC_NUM = [
  2.15311535474403846e-8, 5.64188496988670089e-1, 8.88314979438837594, 6.61191906371416295e1, 2.98635138197400131e2,
  8.81952221241769090e2, 1.71204761263407058e3, 2.05107837782607147e3, 1.23033935479799725e3,
];
const ERFC_DEN = [
  1, 1.57449261107098347e1, 1.17693950891312499e2, 5.37181101862009858e2, 1.62138957456669019e3,
  3.29079923573345963e3, 4.36261909014324716e3, 3.43936767414372164e3, 1.23033935480374942e3,
];
const TAIL_NUM = [
  1.63153871373020978e-2, 3.05326634961232344e-1, 3.60344899949804439e-1, 1.25781726111229246e-1, 1.60837851487422766e-2,
  6.58749161529837803e-4,
];
const TAIL_DEN = [
  1, 2.56852019228982242, 1.87295284992346725, 5.27905102951428412e-1, 6.05183413124413191e-2, 2.33520497626869185e-3,
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
  2.5090809287301226727e3, 3.3430575583588128105e4, 6.7265770927008700853e4, 4.5921953931549871457e4, 1.3731693765509461125e4,
  1.9715909503065514427e3, 1.3314166789178437745e2, 3.3871328727963666080,
];
const CENTRE_DEN = [
  5.2264952788528545610e3, 2.8729085735721942674e4, 3.9307895800092710610e4, 2.1213794301586595867e4, 5.3941960214247511077e3,
  6.8718700749205790830e2, 4.2313330701600911252e1, 1,
];
const MIDDLE_NUM = [
  7.74545014278341407640e-4, 2.27238449892691845833e-2, 2.41780725177450611770e-1, 1.27045825245236838258, 3.64784832476320460504,
  5.76949722146069140550, 4.63033784615654529590, 1.42343711074968357734,
];
const MIDDLE_DEN = [
  1.05075007164441684324e-9, 5.47593808499534494600e-4, 1.51986665636164571966e-2, 1.48103976427480074590e-1,
  6.89767334985100004550e-1, 1.67638483018380384940, 2.05319162663775882187, 1,
];
const FAR_NUM = [
  2.01033439929228813265e-7, 2.71155556874348757815e-5, 1.24266094738807843860e-3, 2.65321895265761230930e-2,
  2.96560571828504891230e-1, 1.78482653991729133580, 5.46378491116411436990, 6.65790464350110377720,
];
const FAR_DEN = [
  2.04426310338993978564e-15, 1.42151175831644588870e-7, 1.84631831751005468180e-5, 7.86869131145613259100e-4,
  1.48753612908506148525e-2, 1.36929880922735805310e-1, 5.99832206555887937690e-1, 1,
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
