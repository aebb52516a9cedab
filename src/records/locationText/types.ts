import type { AliquotPart, FootageCalls, SectionReference, Side } from '../../geodesy/sections/types.js';
import type { Datum } from '../../geodesy/types.js';
import { US_SURVEY_FOOT_M } from '../../units.js';

/**
 * What a text says of a place, nothing added to it. Resolutions are the size of the last digit written; they say how
 * the text was rounded, not how well the place was known.
 */
export type LocationStatement = SingleStatement | CombinedStatement;
export type SingleStatement = GeographicStatement | ProjectedStatement | SectionStatement | MapCornerStatement;

/** Several statements in one text, in its order; at most one of a kind, save that a pair may stand on each of two datums. */
export interface CombinedStatement {
  readonly kind: 'combined';
  readonly parts: readonly SingleStatement[];
}

/** How the text says on which side of Greenwich a longitude lies; `assumed` where `westPositive` has said it. */
export type LonSide = 'stated' | 'assumed' | 'unsaid';

/** Longitude and latitude. An `unsaid` longitude has no sign and counts as east. */
export interface GeographicStatement {
  readonly kind: 'geographic';
  readonly lonDeg: number;
  readonly latDeg: number;
  readonly lonResolutionDeg: number;
  readonly latResolutionDeg: number;
  readonly lonSide: LonSide;
  readonly datum?: Datum;
}

/** Distances from a parallel and a meridian that cross at a corner of a map. */
export interface MapCornerStatement {
  readonly kind: 'mapCorner';
  readonly lonDeg: number;
  readonly latDeg: number;
  readonly lonResolutionDeg: number;
  readonly latResolutionDeg: number;
  readonly lonSide: LonSide;
  /** Metres from the meridian, positive to the east, and from the parallel, positive to the north. */
  readonly eastM: number;
  readonly northM: number;
  readonly eastResolutionM: number;
  readonly northResolutionM: number;
  readonly datum?: Datum;
}

/** `foot` is a foot of which the text does not say which. */
export type ProjectedUnit = 'metre' | 'US survey foot' | 'international foot' | 'foot';

export type ProjectedSystem =
  | { readonly kind: 'UTM'; readonly zone: number }
  | { readonly kind: 'State Plane'; readonly zone: number; readonly name: string };

/** Easting and northing as written, in `unit`; the system, unit and datum are null or absent where the text names none. */
export interface ProjectedStatement {
  readonly kind: 'projected';
  readonly system: ProjectedSystem | null;
  readonly unit: ProjectedUnit | null;
  readonly easting: number;
  readonly northing: number;
  readonly eastingResolution: number;
  readonly northingResolution: number;
  readonly datum?: Datum;
}

/** What a call or a tie is measured from: a part that the text names for it (`[]` the section), the lot, or one that it leaves open. */
export type MeasuredFrom = AliquotPart | 'lot' | 'unsaid';

/** A corner of a section or part; `N4` is the quarter corner on the north line, `C` the centre. */
export type CornerName = 'NE' | 'NW' | 'SE' | 'SW' | 'N4' | 'S4' | 'E4' | 'W4' | 'C';

export interface CornerOffset {
  readonly distanceM: number;
  readonly resolutionM: number;
  readonly toward: Side;
}

/** One or two distances from a corner, along the lines that meet there: `40 rods N and 20 rods E of SW cor`. */
export interface CornerTie {
  readonly corner: CornerName;
  readonly offsets: readonly CornerOffset[];
  readonly of: MeasuredFrom;
}

export interface SectionStatement {
  readonly kind: 'section';
  /** What the text says of township, range, section, meridian and lot; other columns may have to say the rest. */
  readonly reference: Partial<SectionReference>;
  /** The part of the section that the text names, null where it names none. */
  readonly part: AliquotPart | null;
  /** The text says the centre of `part`, or of the lot or section where `part` is null. */
  readonly centre: boolean;
  /** Calls from two lines. `unsaid` where a part stands beside them without a word that joins the two. */
  readonly footage: { readonly calls: FootageCalls; readonly of: MeasuredFrom } | null;
  readonly tie: CornerTie | null;
}

/** Names of the units that a bare length may be taken in. */
export type LengthUnitName = 'ft' | 'rod' | 'chain' | 'link' | 'm';

export interface LocationTextOptions {
  /** Which comes first in a pair of which nothing else decides it. */
  readonly pairOrder: 'unsaid' | 'latitude first' | 'longitude first';
  /** A longitude without sign or letter counts as west. */
  readonly westPositive: boolean;
  /** Unit of a length that has none; null refuses it. `FNL` and its like say feet themselves. */
  readonly bareLengthUnit: LengthUnitName | null;
  /** Longest call from a section line, metres; a call from a part is held to the part's share of it. */
  readonly maxCallM: number;
  /** Highest township and range numbers. */
  readonly maxTownship: number;
  readonly maxRange: number;
}

/** A section is nominally a mile. Townships reach 168 (5th meridian, Minnesota) and ranges 121 (6th meridian, Wyoming); from memory. */
export const LOCATION_TEXT_DEFAULTS: LocationTextOptions = Object.freeze({
  pairOrder: 'unsaid', westPositive: false, bareLengthUnit: null,
  maxCallM: 5280 * US_SURVEY_FOOT_M, maxTownship: 168, maxRange: 121,
});
