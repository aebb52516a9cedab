import type { AnomalyClass } from '../anomalies/types.js';
import type { FindingWord } from '../findings/types.js';
import { html, type Html } from './html.js';

/** What each class is called and how it is drawn; the shape tells them apart, colour does not have to. */
export const CLASS_WORDS: Readonly<Record<AnomalyClass, string>> = Object.freeze({
  casing: 'casing', linear: 'pipe, cable, fence', compact: 'compact iron', unresolved: 'unresolved',
});

export const FINDING_WORDS: Readonly<Record<FindingWord, string>> = Object.freeze({
  located: 'located', ambiguous: 'ambiguous', not_found: 'not found', not_searched: 'not searched', unrecorded: 'not on record',
});

/** Marker of an anomaly, centred on the origin, about 12 wide. A line is turned to its strike, degrees clockwise from up. */
export function anomalyMark(kind: AnomalyClass, strikeDeg = NaN): Html {
  switch (kind) {
    case 'casing': return html`<circle class="mark" r="6"/><circle class="hole" r="2.2"/>`;
    case 'linear': return html`<rect class="mark" x="-2.2" y="-8.5" width="4.4" height="17" rx="1.5" transform="rotate(${round(Number.isFinite(strikeDeg) ? strikeDeg : 45)})"/>`;
    case 'compact': return html`<path class="mark" d="M0-6.8L6.8 0L0 6.8L-6.8 0Z"/>`;
    default: return html`<path class="mark open" d="M0-6.2L6.2 5L-6.2 5Z"/>`;
  }
}

/** Marker of a record: a cross in a ring. */
export function recordMark(): Html {
  return html`<circle class="record-ring" r="5.2"/><path class="record-cross" d="M-8 0H8M0-8V8"/>`;
}

/** Small sign in front of a finding's word. */
export function findingSign(word: FindingWord | 'unplaced'): Html {
  const shapes: Readonly<Record<FindingWord | 'unplaced', Html>> = {
    located: html`<circle cx="8" cy="8" r="6" fill="currentColor"/>`,
    ambiguous: html`<circle cx="8" cy="8" r="5.2" class="stroke"/><path d="M8 2.8A5.2 5.2 0 0 1 8 13.2Z" fill="currentColor"/>`,
    not_found: html`<circle cx="8" cy="8" r="5.2" class="stroke"/><path d="M4.6 11.4L11.4 4.6" class="stroke"/>`,
    not_searched: html`<circle cx="8" cy="8" r="5.2" class="stroke dashed"/>`,
    unrecorded: html`<path d="M8 1.4L14.6 8L8 14.6L1.4 8Z" fill="currentColor"/>`,
    unplaced: html`<path d="M8 2L14.6 13.6H1.4Z" class="stroke"/><path d="M8 6.2V9.6M8 11V12" class="stroke"/>`,
  };
  return html`<svg class="sign" viewBox="0 0 16 16" aria-hidden="true">${shapes[word]}</svg>`;
}

/** A drawn number: a tenth of a unit is finer than any screen or print shows, and equal inputs give equal text. */
export function round(value: number): number {
  return Math.round(value * 10) / 10 || 0;
}
