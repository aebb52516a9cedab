import { UserError } from '../errors.js';

const INCH_M = 0.0254;
const FOOT_M = 0.3048;
const POUND_KG = 0.45359237;
/** Density of casing steel, kg/m³: what API's plain-end weight formula 10.69 (D − t) t (lb/ft, inches) stands on. */
export const STEEL_KG_PER_M3 = 7850;

/**
 * Casing by outside diameter in inches: nominal weight in lb/ft, threads and coupling included, and wall in inches.
 * Source: API Spec 5CT, table of casing sizes, as printed in public tables.
 */
const WALLS_IN: ReadonlyMap<number, ReadonlyArray<readonly [lbPerFt: number, wallIn: number]>> = new Map([
  [4.5, [[9.5, 0.205], [10.5, 0.224], [11.6, 0.250], [13.5, 0.290], [15.1, 0.337]]],
  [5, [[11.5, 0.220], [13, 0.253], [15, 0.296], [18, 0.362], [21.4, 0.437], [23.2, 0.478]]],
  [5.5, [[14, 0.244], [15.5, 0.275], [17, 0.304], [20, 0.361], [23, 0.415], [26, 0.476]]],
  [6.625, [[20, 0.288], [24, 0.352], [28, 0.417], [32, 0.475]]],
  [7, [[17, 0.231], [20, 0.272], [23, 0.317], [26, 0.362], [29, 0.408], [32, 0.453], [35, 0.498], [38, 0.540]]],
  [7.625, [[20, 0.250], [24, 0.300], [26.4, 0.328], [29.7, 0.375], [33.7, 0.430], [39, 0.500]]],
  [8.625, [[24, 0.264], [28, 0.304], [32, 0.352], [36, 0.400], [40, 0.450], [44, 0.500], [49, 0.557]]],
  [9.625, [[32.3, 0.312], [36, 0.352], [40, 0.395], [43.5, 0.435], [47, 0.472], [53.5, 0.545]]],
  [10.75, [[32.75, 0.279], [40.5, 0.350], [45.5, 0.400], [51, 0.450], [55.5, 0.495]]],
  [11.75, [[42, 0.333], [47, 0.375]]],
  [13.375, [[48, 0.330], [54.5, 0.380], [61, 0.430], [68, 0.480], [72, 0.514]]],
  [16, [[65, 0.375], [75, 0.438], [84, 0.495]]],
  [20, [[94, 0.438], [106.5, 0.500], [133, 0.635]]],
]);

export interface CasingSize {
  /** Outside diameter, inches. */
  readonly odIn: number;
  /** Nominal weight, pounds per foot. */
  readonly lbPerFt: number;
}

export interface CasingSteel {
  readonly wallIn: number;
  readonly idIn: number;
  /** Cross-section of the steel, m². */
  readonly steelAreaM2: number;
  /** False where the size is none of API's and the wall was worked out from the weight (at most 5 % too much steel,
   *  since a nominal weight counts the couplings). */
  readonly listed: boolean;
}

/** Sizes that are listed, for help and completion. */
export function listedCasings(): CasingSize[] {
  return [...WALLS_IN].flatMap(([odIn, rows]) => rows.map(([lbPerFt]) => ({ odIn, lbPerFt })));
}

/**
 * Wall and steel cross-section of a casing. Sizes older than API's, which many lost wells have, are worked out from the
 * weight: area = mass per metre ÷ density.
 */
export function casingSteel({ odIn, lbPerFt }: CasingSize): CasingSteel {
  const positive = odIn > 0 && lbPerFt > 0 && Number.isFinite(odIn) && Number.isFinite(lbPerFt);
  const solidLbPerFt = (Math.PI / 4) * (odIn * INCH_M) ** 2 * STEEL_KG_PER_M3 * (FOOT_M / POUND_KG);
  if (!positive || lbPerFt >= solidLbPerFt) {
    throw new UserError({
      code: 'value_invalid', where: 'casing size', found: `outside diameter ${odIn} in, ${lbPerFt} lb/ft`,
      wanted: positive ? `less than ${solidLbPerFt.toFixed(0)} lb/ft, the weight of a solid bar` : 'a positive diameter in inches and weight in lb/ft',
    });
  }
  const wall = WALLS_IN.get(odIn)?.find(([weight]) => weight === lbPerFt)?.[1];
  const idIn = wall === undefined ? odIn * Math.sqrt(1 - lbPerFt / solidLbPerFt) : odIn - 2 * wall;
  return {
    idIn, wallIn: (odIn - idIn) / 2, listed: wall !== undefined,
    steelAreaM2: (Math.PI / 4) * (odIn * odIn - idIn * idIn) * INCH_M * INCH_M,
  };
}

/**
 * Pole strength of a casing's top, A·m, lowest and highest: magnetisation times the steel's cross-section.
 *
 * @param magnetisationAPerM Lowest and highest magnetisation along the pipe, A/m. It is for the user to state, since
 *   remanence usually outweighs what the main field induces, and nobody can read it off the size.
 *
 * Source: a long rod magnetised along its length ends in poles of M times its cross-section (Breiner 1973).
 */
export function poleFromCasing(size: CasingSize, magnetisationAPerM: readonly [number, number]): readonly [number, number] {
  const [low, high] = magnetisationAPerM;
  if (!(low > 0 && high >= low && Number.isFinite(high))) {
    throw new UserError({
      code: 'value_invalid', where: 'magnetisation of the casing', found: `${low} to ${high} A/m`,
      wanted: 'two positive numbers in A/m, the lower one first',
    });
  }
  const { steelAreaM2 } = casingSteel(size);
  return [low * steelAreaM2, high * steelAreaM2];
}
