import { drawnEllipse, noShapes, type KnownShapes } from '../density/drawnEllipse.js';
import { densityCovariance, densityMean } from '../density/moments.js';
import type { Area, Covariance, Density, GaussianPart } from '../density/types.js';
import type { Site } from '../site/types.js';
import { middleOfTruncated } from './digits.js';
import { framePlace, type FramePlace } from './framePlace.js';
import type { RawPlace, RawRecord } from './rawRecord.js';
import type { DatumWeights } from './recordDatum.js';
import { RECORD_FILE_DEFAULTS, sourceCrs, type RecordSource } from './recordSource.js';
import { metres, sourceError } from './sourceError.js';
import type { WellRecord } from './types.js';

/** A Gaussian needs a width: a centimetre is less than any record, and any magnetometer, tells apart. */
const MIN_SD_M = 0.01;
/** What is smaller is left out of the words, not of the sum. */
const SAID_FROM_M = 0.05;
/**
 * Share of the variance, along either axis, up to which the rounding of digits is taken as Gaussian: the 95 % ellipse of
 * such a place then holds 95.0 to 95.2 %. A larger share is kept as what it is, an even spread over a digit.
 */
const ROUNDING_SHARE = 0.25;

/**
 * A row with plausible coordinates as a record: its error budget summed by covariance (source, digits, datum shift), its
 * density a Gaussian, with its digits where they weigh, for each datum it may be in; the blunder share is spread over
 * `blunderArea` (the record's section), else over a disc of `blunderRadiusM`.
 *
 * The density is the record's own: it holds the part that a group shares as well as the independent part. The shared part
 * is given once more in `group`, for those who treat the records of a group together.
 */
export function placeRecord(raw: RawRecord & { readonly place: RawPlace }, datums: DatumWeights, options: {
  readonly source: RecordSource; readonly site: Site; readonly blunderRadiusM: number;
  readonly blunderArea?: Area; readonly shapes?: KnownShapes;
}): WellRecord {
  const { source, site, blunderRadiusM, blunderArea, shapes = noShapes() } = options;
  const settings = { ...RECORD_FILE_DEFAULTS, ...source.settings };
  const row = raw.errorM !== null || raw.error90M !== null || raw.error95M !== null;
  const stated = row ? raw : { errorM: settings.errorM ?? null, error90M: settings.error90M ?? null, error95M: settings.error95M ?? null };
  const error = sourceError(stated, { class: settings.source, mapScale: settings.mapScale ?? null }, row ? `${source.name}, row ${raw.row}` : source.name);
  const crs = sourceCrs(source);
  const middle = settings.digits === 'truncated' ? middleOfTruncated(raw.place) : raw.place;
  const places = datums.map(({ datum, weight }) => ({ datum, weight, at: framePlace(middle, { crs, shift: site.shiftFrom(datum), frame: site.frame }) }));

  const { blunderShare } = settings;
  const partOf = (at: FramePlace, weight: number): GaussianPart => {
    const { rounding, halfDigits } = at;
    const round = error.sdM ** 2 + at.sdM ** 2 + at.sharedSdM ** 2 + settings.sharedSdM ** 2 + MIN_SD_M ** 2;
    const cov: Covariance = [rounding[0] + round, rounding[1], rounding[2] + round];
    const part: GaussianPart = { kind: 'gaussian', weight, x: at.x, y: at.y, cov };
    const widest = Math.max(at.roundingEastM, at.roundingNorthM) ** 2;
    return widest > ROUNDING_SHARE * (widest + round) ? { ...part, rounding: halfDigits } : part;
  };
  const place: Density = { parts: places.map(({ weight, at }) => ({ ...partOf(at, weight * (1 - blunderShare)), role: 'place' })) };
  const { x, y } = densityMean(place);
  const spread = blunderArea ? { kind: 'area', area: blunderArea } as const : { kind: 'disc', x, y, radiusM: blunderRadiusM } as const;
  const density: Density = blunderShare === 0 ? place : { parts: [...place.parts, { ...spread, role: 'blunder', weight: blunderShare }] };
  const { ellipse: { semiMajM, semiMinM, azimDeg }, excess } = drawnEllipse(place, shapes);
  const [ee, , nn] = densityCovariance(place);
  const only = places.length === 1 ? places[0]! : null;
  const sharedSdM = only ? Math.hypot(only.at.sharedSdM, settings.sharedSdM) : 0;
  return {
    recordId: raw.recordId, source: source.name, row: raw.row, x, y, density, semiMajM, semiMinM, azimDeg, excess,
    posSdM: Math.sqrt((ee + nn) / 2),
    datum: only?.datum ?? 'unknown',
    shift: places.map(({ datum, at, weight }) => (only ? at.shift : `${percent(weight)} ${datum}: ${at.shift}`)).join('; '),
    basis: [error.words, ...budgetWords(places[0]!.at, settings.sharedSdM), ...(blunderShare > 0 ? [`${percent(blunderShare)} blunders within ${blunderArea ? 'the section' : metres(blunderRadiusM)}`] : [])].join('; '),
    note: [raw.note, ...(only ? [] : [`datum not stated, taken as ${places.map((each) => `${each.datum} ${percent(each.weight)}`).join(', ')}`])].filter((text) => text !== '').join('; '),
    group: sharedSdM > 0 ? { id: [source.name, only!.datum, ...(raw.group === '' ? [] : [raw.group])].join(' / '), sharedSdM } : null,
    pCasing: settings.pCasing,
  };
}

/** The other components in metres, one σ per axis. */
function budgetWords({ roundingEastM, roundingNorthM, sdM, sharedSdM }: FramePlace, groupSdM: number): string[] {
  const words: string[] = [];
  if (Math.max(roundingEastM, roundingNorthM) >= SAID_FROM_M) words.push(`digits ${metres(roundingNorthM)} north, ${metres(roundingEastM)} east`);
  if (sdM >= SAID_FROM_M) words.push(`datum shift ${metres(sdM)}`);
  if (sharedSdM >= SAID_FROM_M) words.push(`datum shift shared by neighbours ${metres(sharedSdM)}`);
  if (groupSdM >= SAID_FROM_M) words.push(`shared by its group ${metres(groupSdM)}`);
  return words;
}

function percent(share: number): string {
  return `${Number((share * 100).toFixed(1))} %`;
}
