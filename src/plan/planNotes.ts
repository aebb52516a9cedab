import { areaM2 } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { MainField } from '../site/types.js';
import { magneticAzimuthDeg, trueAzimuthDeg } from './azimuths.js';
import type { FilledLines } from './fillGaps.js';
import type { Listening } from './planChances.js';
import type { Sorties } from './sorties.js';
import type { AdvisedSpacing } from './spacingForTarget.js';

/** Ground below this share of the area that lies too far from a line is not worth a sentence. */
const SAID_FROM = 5e-4;

/** What a plan has to say about itself, sentence by sentence. `wantedChance` is null where the user stated the spacing. */
export function planNotes(plan: {
  readonly ground: Area; readonly spacing: AdvisedSpacing; readonly wantedChance: number | null; readonly listening: Listening;
  readonly azimuthDeg: number; readonly mainField: MainField; readonly minLengthM: number;
  readonly survey: FilledLines; readonly ties: { readonly pieces: readonly unknown[]; readonly dropped: number; readonly untied: number };
  readonly sorties: Sorties; readonly savedM: number;
}): string[] {
  const { survey, ties, sorties, azimuthDeg, mainField, spacing: { spacingM } } = plan;
  const notes = [
    `${count(survey.pieces.length, 'survey line')} ${number(spacingM)} m apart and ${count(ties.pieces.length, 'tie line')} on ${number(areaM2(plan.ground) / 10_000)} ha: `
    + `${kilometres(sorties.lineLengthM)} of lines and ${kilometres(sorties.deadLengthM)} of ways between them, in ${count(sorties.count, 'outing')}.`,
    `Lines run at ${azimuthDeg.toFixed(1)}° from grid north, ${trueAzimuthDeg(azimuthDeg, mainField).toFixed(1)}° true, ${magneticAzimuthDeg(azimuthDeg, mainField).toFixed(1)}° magnetic.`,
    ...spacingNotes(plan),
  ];
  if (plan.savedM >= 1) notes.push(`The order of the lines saves ${kilometres(plan.savedM)} of ways against walking them one after the other.`);
  if (ties.pieces.length > 0 && ties.untied > 0) {
    notes.push(`${count(ties.untied, 'survey line')} ${ties.untied === 1 ? 'is' : 'are'} crossed by no tie line: without a base station nothing ties their level.`);
  }
  const dropped = survey.dropped + ties.dropped;
  if (dropped > 0) notes.push(`${count(dropped, 'piece')} of lines shorter than ${number(plan.minLengthM)} m ${dropped === 1 ? 'was' : 'were'} left out.`);
  const share = survey.uncoveredM2 / areaM2(plan.ground);
  if (share >= SAID_FROM) notes.push(`${number(share * 100)} % of the ground (${Math.round(survey.uncoveredM2)} m²) lies farther than half a spacing from every survey line.`);
  if (sorties.round > 0) notes.push(`${count(sorties.round, 'way')} between lines ${sorties.round === 1 ? 'leads' : 'lead'} round ground that may not be walked; the length is that of the way round.`);
  if (sorties.outside > 0) notes.push(`${count(sorties.outside, 'way')} between lines ${sorties.outside === 1 ? 'has' : 'have'} to leave the open ground, since no way within it leads there: settle beforehand how to cross.`);
  return notes;
}

function spacingNotes({ spacing: { spacingM, chance }, wantedChance, listening }: {
  readonly spacing: AdvisedSpacing; readonly wantedChance: number | null; readonly listening: Listening;
}): string[] {
  const { heightM, target: { poleAM, depthM }, noise } = listening;
  const target = `a casing of ${number(poleAM[0])} to ${number(poleAM[1])} A·m at ${number(depthM[0])} to ${number(depthM[1])} m`;
  const noises = `noise of ${number(noise.whiteSdNT)} nT a reading and ${number(noise.correlatedSdNT)} nT of the ground, sensor ${number(heightM)} m up`;
  const promise = `At the worst place between two lines ${target} is detected with a chance of ${percent(chance)} (${noises}: expected, not measured).`;
  if (chance === 0) return [`Between lines ${number(spacingM)} m apart there is ground beyond the reach of both: a casing there is not searched for.`];
  if (wantedChance !== null && chance < wantedChance) return [promise, `That is less than the ${percent(wantedChance)} wanted, and closer lines would not mend it: lower the sensor or the noise, or look at the target.`];
  return [promise];
}

function percent(share: number): string {
  if (share > 0.999) return 'over 99.9 %';
  return `${number(share * 100)} %`;
}

function count(n: number, word: string): string {
  return `${n} ${word}${n === 1 ? '' : 's'}`;
}

function number(value: number): string {
  return value.toLocaleString('en-US', { maximumSignificantDigits: 3, useGrouping: false });
}

function kilometres(lengthM: number): string {
  return lengthM < 1000 ? `${Math.round(lengthM)} m` : `${(lengthM / 1000).toFixed(1)} km`;
}
