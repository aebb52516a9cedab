import { areaM2 } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { FilledLines } from './fillGaps.js';
import type { Sorties } from './sorties.js';

/** Ground below this share of the area that lies too far from a line is not worth a sentence. */
const SAID_FROM = 5e-4;

/** What a plan has to say about itself, sentence by sentence. */
export function planNotes(plan: {
  readonly ground: Area; readonly spacingM: number; readonly minLengthM: number;
  readonly survey: FilledLines; readonly ties: { readonly pieces: readonly unknown[]; readonly dropped: number };
  readonly sorties: Sorties; readonly plainDeadM: number; readonly deadM: number;
}): string[] {
  const { survey, ties, sorties, spacingM } = plan;
  const notes = [
    `${survey.pieces.length} survey lines ${number(spacingM)} m apart and ${ties.pieces.length} tie lines on ${number(areaM2(plan.ground) / 10_000)} ha: `
    + `${kilometres(sorties.lineLengthM)} of lines and ${kilometres(sorties.deadLengthM)} of ways between them, in ${count(sorties.count, 'outing')}.`,
  ];
  const saved = plan.plainDeadM - plan.deadM;
  if (saved >= 1) notes.push(`The order of the lines saves ${kilometres(saved)} of ways against walking them one after the other.`);
  const dropped = survey.dropped + ties.dropped;
  if (dropped > 0) notes.push(`${count(dropped, 'piece')} of lines shorter than ${number(plan.minLengthM)} m ${dropped === 1 ? 'was' : 'were'} left out.`);
  const share = survey.uncoveredM2 / areaM2(plan.ground);
  if (share >= SAID_FROM) notes.push(`${number(share * 100)} % of the ground (${Math.round(survey.uncoveredM2)} m²) lies farther than half a spacing from every survey line.`);
  if (sorties.round > 0) notes.push(`${count(sorties.round, 'way')} between lines ${sorties.round === 1 ? 'leads' : 'lead'} round ground that may not be walked; the length is that of the way round.`);
  if (sorties.outside > 0) notes.push(`${count(sorties.outside, 'way')} between lines ${sorties.outside === 1 ? 'has' : 'have'} to leave the open ground, since no way within it leads there: settle beforehand how to cross.`);
  return notes;
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
