import { areaBounds, areaM2 } from '../density/area.js';
import type { Area } from '../density/types.js';
import { DETECTION_GRID_DEFAULTS } from '../detection/detectionGrid.js';
import { WALK_DEFAULTS } from '../detection/heardAlongLines.js';
import { UserError } from '../errors.js';
import type { Records } from '../records/types.js';
import type { Site } from '../site/types.js';
import { fillGaps } from './fillGaps.js';
import { areaToUV, lineFrame, type LineFrame } from './lineFrame.js';
import { halfTurn, minimumRectangle } from './minimumRectangle.js';
import { OpenWays } from './openWays.js';
import { parallelLines, type Piece } from './parallelLines.js';
import { cellOrder, plainOrder } from './plainOrder.js';
import { planChances, type Listening } from './planChances.js';
import { planNotes } from './planNotes.js';
import { searchArea } from './searchArea.js';
import { splitSorties, type Walked } from './sorties.js';
import { spacingForTarget, worstChance } from './spacingForTarget.js';
import type { SurveyPlan } from './types.js';
import { deadLength, walkOrder, type Segment } from './walkOrder.js';

export interface PlanOptions {
  /** The whole parcel, or the ground that the records' ellipses cover. */
  readonly area?: 'parcel' | 'records';
  /** Share of a record's density that its ellipse holds. */
  readonly recordShare?: number;
  /** Ground searched beyond the ellipses. */
  readonly marginM?: number;
  /** Without it the widest for which the worst place between two lines keeps `spacingChance`. */
  readonly spacingM?: number;
  readonly spacingChance?: number;
  /** From grid north; without it along the longer side of the smallest rectangle round the ground. */
  readonly azimuthDeg?: number;
  /** Tie lines lie this many spacings apart; 0 for none. */
  readonly tieRatio?: number;
  /** Pieces of a line shorter than this are left out. */
  readonly minLengthM?: number;
  /** Way of one outing, dead ways included. */
  readonly sortieLengthM?: number;
  /** Sensor above ground. */
  readonly sensorM?: number;
  /** Noise to be expected: of a reading; of the ground, with the distance over which it changes; of positions. */
  readonly whiteNt?: number;
  readonly geologyNt?: number;
  readonly geologyM?: number;
  readonly positionSdM?: number;
  readonly positionCorrS?: number;
  readonly falseAlarmsPerHa?: number;
}

export const PLAN_DEFAULTS = Object.freeze({
  area: 'parcel' as 'parcel' | 'records',
  recordShare: 0.95,
  /** A casing at the ellipse's edge needs a line on either side of it (common practice). */
  marginM: 10,
  spacingChance: 0.95,
  /** Common practice: ties ten times as far apart as lines. */
  tieRatio: 10,
  /** A line of a few steps gives too few readings to level. */
  minLengthM: 5,
  /** Common practice: half a day on foot, about one charge. */
  sortieLengthM: 8000,
  sensorM: WALK_DEFAULTS.heightM,
  /** Common practice for a walked survey after reduction, to be replaced by what the ground is known to give. */
  whiteNt: 1,
  geologyNt: 3,
  geologyM: 15,
  positionSdM: 0.3,
  positionCorrS: 60,
  falseAlarmsPerHa: DETECTION_GRID_DEFAULTS.falseAlarmsPerHa,
});

/**
 * A search plan: the ground, parallel survey lines and ties across it within the ground that may be walked, in an order with
 * short dead ways, split into outings, with the chance that it promises for each record. Frame metres; azimuths clockwise
 * from grid north. No clock, no chance: the same site, records and options give the same plan.
 */
export function planSurvey(site: Site, records: Records | null, options: PlanOptions = {}): SurveyPlan {
  const settings = { ...PLAN_DEFAULTS, ...options };
  const { tieRatio, minLengthM } = settings;
  const ground = searchGround(site, records, settings);
  const { west, south, east, north } = areaBounds(ground);
  const azimuthDeg = halfTurn(options.azimuthDeg ?? minimumRectangle(ground).azimDeg);
  const listening = listeningOf(site, settings);
  const spacing = options.spacingM === undefined
    ? spacingForTarget(listening, { azimuthDeg, wantedChance: settings.spacingChance })
    : { spacingM: options.spacingM, chance: worstChance(options.spacingM, listening, azimuthDeg) };
  const { spacingM } = spacing;
  const along = lineFrame(azimuthDeg, [(west + east) / 2, (south + north) / 2]);
  const across = lineFrame(azimuthDeg + 90, [(west + east) / 2, (south + north) / 2]);
  const groundUV = areaToUV(ground, along);
  const survey = fillGaps(groundUV, parallelLines(groundUV, spacingM), { spacingM, minLengthM });
  const ties = tieLines(tieRatio > 0 ? parallelLines(areaToUV(ground, across), tieRatio * spacingM) : [], survey.pieces, minLengthM);
  if (survey.pieces.length === 0) {
    throw new UserError({
      code: 'no_data', where: 'plan', found: `no line of ${minLengthM} m on the ground to be searched (${Math.round(areaM2(ground))} m²)`,
      wanted: 'ground for at least one line', advice: 'lower min_length_m, or look at the parcel and its exclusions',
    });
  }
  const ways = new OpenWays(site.open);
  const surveyWalk = walk(survey.pieces, along, { ways });
  const tieWalk = walk(ties.pieces, across, { ways, from: surveyWalk.end });
  const sorties = splitSorties([
    ...surveyWalk.steps.map(({ index, ...ends }): Walked => ({ ...ends, kind: 'survey', lineNo: index + 1 })),
    ...tieWalk.steps.map(({ index, ...ends }): Walked => ({ ...ends, kind: 'tie', lineNo: survey.pieces.length + index + 1 })),
  ], ways, settings.sortieLengthM);
  return {
    searchArea: ground, spacingM, lineAzimDeg: azimuthDeg, lines: sorties.lines,
    chances: planChances(sorties.lines, records?.placed ?? [], { open: site.open, listening }),
    notes: planNotes({
      ground, spacing, listening, azimuthDeg, mainField: site.mainField, minLengthM, survey, ties, sorties,
      wantedChance: options.spacingM === undefined ? settings.spacingChance : null,
      savedM: surveyWalk.plainDeadM + tieWalk.plainDeadM - surveyWalk.deadM - tieWalk.deadM,
    }),
  };
}

function listeningOf({ target, mainField }: Site, settings: Required<Omit<PlanOptions, 'spacingM' | 'azimuthDeg'>>): Listening {
  const { sensorM, whiteNt, geologyNt, geologyM, positionSdM, positionCorrS, falseAlarmsPerHa } = settings;
  return {
    heightM: sensorM, target, mainField, falseAlarmsPerHa,
    noise: { whiteSdNT: whiteNt, correlatedSdNT: geologyNt, correlationM: geologyM, positionSdM, positionCorrelationS: positionCorrS },
  };
}

/** Ties long enough to walk, in the frame across the lines, and how many survey pieces (in their own frame) no tie crosses. */
function tieLines(all: readonly Piece[], survey: readonly Piece[], minLengthM: number): { pieces: readonly Piece[]; dropped: number; untied: number } {
  const pieces = all.filter(({ u0, u1 }) => u1 - u0 >= minLengthM);
  // Seen from the lines, a tie stands at u = −v and reaches from v = u0 to u1: the frames are a quarter turn apart.
  const untied = survey.filter(({ v, u0, u1 }) => !pieces.some((tie) => u0 <= -tie.v && -tie.v <= u1 && tie.u0 <= v && v <= tie.u1));
  return { pieces, dropped: all.length - pieces.length, untied: untied.length };
}

function searchGround(site: Site, records: Records | null, { area, recordShare, marginM }: Required<Pick<PlanOptions, 'area' | 'recordShare' | 'marginM'>>): Area {
  if (area === 'parcel') return site.open;
  const placed = records?.placed ?? [];
  if (placed.length === 0) {
    throw new UserError({ code: 'input_missing', where: 'plan, area', found: '"records" without a placed record', wanted: 'records with a place', advice: 'run locate first, or plan the whole parcel with "area": "parcel"' });
  }
  const ground = searchArea(placed.map(({ density }) => density), site.open, { mass: recordShare, marginM });
  if (ground.length === 0) {
    throw new UserError({ code: 'outside_area', where: 'plan, area', found: 'no record whose ground reaches the open parcel', wanted: 'a record on or near it', advice: 'look at the records\' datum and places, or plan the whole parcel' });
  }
  return ground;
}

interface Walk {
  readonly steps: ReadonlyArray<{ readonly index: number; readonly x0: number; readonly y0: number; readonly x1: number; readonly y1: number }>;
  readonly end: readonly [number, number] | undefined;
  /** Dead way as ordered, and as it would be line by line. */
  readonly deadM: number;
  readonly plainDeadM: number;
}

function walk(pieces: readonly Piece[], frame: LineFrame, { ways, from }: { ways: OpenWays; from?: readonly [number, number] | undefined }): Walk {
  const segments = pieces.map(({ v, u0, u1 }): Segment => {
    const [[ax, ay], [bx, by]] = [frame.toXY(u0, v), frame.toXY(u1, v)];
    return { ax, ay, bx, by };
  });
  const options = { cost: ways.cost, ...(from ? { from } : {}) };
  const plain = plainOrder(pieces);
  const order = walkOrder(segments, [plain, cellOrder(pieces)], options);
  const steps = order.map(({ index, reversed }) => {
    const { ax, ay, bx, by } = segments[index]!;
    return reversed ? { index, x0: bx, y0: by, x1: ax, y1: ay } : { index, x0: ax, y0: ay, x1: bx, y1: by };
  });
  const last = steps.at(-1);
  return {
    steps, end: last ? [last.x1, last.y1] : from,
    deadM: deadLength(segments, order, options), plainDeadM: deadLength(segments, plain, options),
  };
}
