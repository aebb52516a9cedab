import { UserError } from '../../errors.js';
import { outerRing } from './outerRing.js';
import { meridianCode, meridianName } from './principalMeridians.js';
import { SECTION_DEFAULTS, sectionGeometry } from './sectionGeometry.js';
import { sectionFinder } from './sectionFinder.js';
import { SECTION_ATTRIBUTES, sectionRows, type SectionAttributes, type SectionRow } from './sectionRows.js';
import type { Ring, Section, SectionFeatures, SectionReference } from './types.js';

export interface SectionLayerOptions {
  /** Names of the layer's columns where they differ from the defaults. */
  readonly attributes: Partial<SectionAttributes>;
  readonly middleToleranceShare: number;
}

export const SECTION_LAYER_DEFAULTS: SectionLayerOptions = Object.freeze({
  attributes: SECTION_ATTRIBUTES, middleToleranceShare: SECTION_DEFAULTS.middleToleranceShare,
});

export interface SectionLayer {
  readonly source: string;
  /** Sections and lots that the layer holds. */
  readonly sections: number;
  readonly lots: number;
  /** What was left out, and why. */
  readonly notes: readonly string[];
  /** How many sections of the layer a reference fits, any lot aside: 0, 1, or more where it does not name the meridian. */
  count(reference: SectionReference): number;
  /**
   * The section that a reference names, its corners found at the first use and kept. Throws UserError `position_invalid`
   * where the layer has none or several, `polygon_invalid` where its polygon is no section. `where` is the record's place.
   */
  section(reference: SectionReference, where: string): Section;
  /** The polygon of the lot that a reference names. Throws likewise, and where the layer has no such lot. */
  lotPolygon(reference: SectionReference, where: string): Ring;
  /** The sections whose polygons hold a place of the frame: none, one, or both neighbours on their common line. */
  sectionsAt(x: number, y: number): readonly SectionReference[];
}

/**
 * Sections and, where the layer has them, government lots, to be looked up by what a record names. Polygons are in
 * metres of `features.crs`, the survey's frame. Throws UserError `column_missing` where the layer lacks the columns.
 */
export function sectionLayer(features: SectionFeatures, options: Partial<SectionLayerOptions> = {}): SectionLayer {
  const { attributes, middleToleranceShare } = { ...SECTION_LAYER_DEFAULTS, ...options };
  const { rows, notes } = sectionRows(features, { ...SECTION_ATTRIBUTES, ...attributes });
  const byName = new Map<string, SectionRow[]>();
  for (const row of rows) {
    const list = byName.get(keyOf(row));
    if (list) list.push(row);
    else byName.set(keyOf(row), [row]);
  }
  let finder: ((x: number, y: number) => SectionRow[]) | null = null;
  const built = new Map<number, Section>();
  const lots = rows.filter((row) => row.lot !== null).length;

  const matches = (reference: SectionReference, where: string, lot: string | null): SectionRow[] => {
    const list = (byName.get(keyOf(reference)) ?? []).filter((row) => row.lot === lot);
    if (reference.meridian === undefined) return list;
    const code = meridianCode(reference.meridian);
    if (code === null) throw notThere(where, `the principal meridian ${JSON.stringify(reference.meridian)}`, 'a principal meridian by its name or code');
    // A layer that names no meridian cannot contradict one.
    return list.filter((row) => row.meridian === null || row.meridian === code);
  };
  const only = (reference: SectionReference, where: string, lot: string | null): SectionRow => {
    const list = matches(reference, where, lot);
    if (list.length === 1) return list[0]!;
    const name = `${lot === null ? '' : `lot ${lot} of `}${nameOf(reference)}`;
    if (list.length === 0) {
      const lacks = lot !== null && lots === 0 ? 'which has no lots' : 'which has none of that name';
      throw notThere(where, `${name}, looked up in ${features.source}, ${lacks}`, 'a section or lot of the section layer');
    }
    const which = list.map((row) => `feature ${row.feature}${row.meridian === null ? '' : ` (${meridianName(row.meridian) ?? `meridian ${row.meridian}`})`}`);
    throw notThere(where, `${name}, which fits ${list.length} polygons of ${features.source}: ${which.join(', ')}`, 'a reference that fits one, with its principal meridian');
  };
  return {
    source: features.source,
    sections: rows.length - lots,
    lots,
    notes,
    count: (reference) => (reference.meridian !== undefined && meridianCode(reference.meridian) === null ? 0 : matches(reference, features.source, null).length),
    section(reference, where) {
      const row = only(reference, where, null);
      let section = built.get(row.feature);
      if (!section) {
        section = sectionGeometry(features.features[row.feature - 1]!.geometry, features.crs, {
          where: `${features.source}, feature ${row.feature}`, name: nameOf(reference), middleToleranceShare,
        });
        built.set(row.feature, section);
      }
      return section;
    },
    lotPolygon(reference, where) {
      if (reference.lot === undefined) throw new Error('lotPolygon: a reference without a lot');
      const row = only(reference, where, lotName(reference.lot));
      const ring = outerRing(features.features[row.feature - 1]!.geometry, `${features.source}, feature ${row.feature}`);
      return [...ring, ring[0]!];
    },
    sectionsAt(x, y) {
      finder ??= sectionFinder(features, rows.filter((row) => row.lot === null));
      return finder(x, y).map(({ township, townshipHalf, townshipDir, range, rangeHalf, rangeDir, section, meridian }) => ({
        township, townshipHalf, townshipDir, range, rangeHalf, rangeDir, section, ...(meridian === null ? {} : { meridian }),
      }));
    },
  };
}

/** As in `section 3, T35S R29E`. */
function nameOf({ section, township, townshipHalf, townshipDir, range, rangeHalf, rangeDir }: SectionReference): string {
  return `section ${section}, T${township}${townshipHalf ? '½' : ''}${townshipDir} R${range}${rangeHalf ? '½' : ''}${rangeDir}`;
}

function keyOf(named: Pick<SectionReference, 'section' | 'township' | 'townshipHalf' | 'townshipDir' | 'range' | 'rangeHalf' | 'rangeDir'>): string {
  return nameOf(named);
}

function lotName(lot: string): string {
  return lot.trim().toUpperCase().replace(/^0+(?=\d)/, '');
}

function notThere(where: string, found: string, wanted: string): UserError {
  return new UserError({ code: 'position_invalid', where, found, wanted });
}
