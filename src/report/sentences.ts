import type { Anomaly } from '../anomalies/types.js';
import type { Finding } from '../findings/types.js';
import type { UnplacedRecord } from '../records/types.js';
import { chanceWords, compass, counted, frameUnit, length, listed, sentence } from './format.js';
import { html, type Html } from './html.js';
import { hasPlace, placeWords } from './places.js';
import type { ReportContent } from './types.js';

/** A pairing less likely than this is left to the table of the layer. */
const WORTH_NAMING = 0.02;

/** Parts of a note that the sentence tells in words of its own. */
const NAMED_ALREADY = /^(weak )?candidates? /;

/** What one finding means, in plain words. */
export function findingSentence(finding: Finding, content: ReportContent): Html {
  const rest = finding.note.split('; ').filter((part) => !NAMED_ALREADY.test(part)).join('; ');
  const note = rest ? html` ${sentence(rest)}` : '';
  return html`${WORDS[finding.finding](finding, content)}${note}`;
}

const WORDS: Readonly<Record<Finding['finding'], (finding: Finding, content: ReportContent) => Html>> = {
  located: (finding, content) => html`Its casing stands at ${where(finding, content)}${distance(finding, content)}${anomalyWords(finding, content)}. The chance that this casing is the recorded well is ${chanceWords(finding.pMatch)}.`,
  ambiguous: (finding, content) => html`${unsettled(finding, content)}${hasPlace(finding) ? html` The place given here is ${where(finding, content)}.` : ''} ${remains(finding)}`,
  not_found: (finding, content) => html`${doubtful(finding, content)} The chance that the well lies in ground searched is ${chanceWords(finding.pCovered)}, and that it lies there and a casing as stated would have been detected, ${chanceWords(finding.pDetect)}. ${remains(finding)}`,
  not_searched: (finding) => html`The ground where it may lie was hardly searched: the chance that it lies in ground searched is ${chanceWords(finding.pCovered)}. The search therefore says next to nothing about it. ${remains(finding)}`,
  unrecorded: (finding, content) => html`A casing that no record tells of stands at ${where(finding, content)}${anomalyWords(finding, content)}. The chance that none of the records is this casing is ${chanceWords(finding.pMatch)}.`,
};

export function anomalyOf({ anomalyId }: { readonly anomalyId: string }, { anomalies }: ReportContent): Anomaly | undefined {
  return anomalyId === '' ? undefined : anomalies?.list.find((anomaly) => anomaly.anomalyId === anomalyId);
}

function where(finding: Finding, { site }: ReportContent): Html {
  return hasPlace(finding) ? placeWords(site, finding.x, finding.y) : html`a place that is not known`;
}

function distance(finding: Finding, { site }: ReportContent): string {
  if (!Number.isFinite(finding.distM)) return '';
  const direction = Number.isFinite(finding.azimDeg) ? ` ${compass(finding.azimDeg)}` : '';
  return `, ${length(finding.distM, frameUnit(site.frame))}${direction} of the recorded place`;
}

function anomalyWords(finding: Finding, content: ReportContent): Html | string {
  if (!finding.anomalyId) return '';
  const anomaly = anomalyOf(finding, content);
  const depth = anomaly && Number.isFinite(anomaly.depthM) ? `, its top about ${length(Math.max(0, anomaly.depthM), frameUnit(content.site.frame))} below ground` : '';
  return html` (anomaly ${finding.anomalyId}${depth})`;
}

/** The casings that it may be, and that it may be none of them: `anomaly A1 (60 %), anomaly A2 (30 %) or none of these (10 %)`; empty where no casing is worth naming. */
function candidates({ recordId, anomalyId, pMatch }: Finding, { findings }: ReportContent): string {
  const told = (findings?.pairs ?? []).filter((pair) => pair.recordId === recordId && pair.p >= WORTH_NAMING).toSorted((a, b) => b.p - a.p || (a.anomalyId < b.anomalyId ? -1 : 1));
  const pairs = told.length > 0 ? told : anomalyId ? [{ recordId, anomalyId, p: pMatch }] : [];
  if (pairs.length === 0) return '';
  const none = 1 - pairs.reduce((sum, { p }) => sum + p, 0);
  const named = pairs.map((pair) => `anomaly ${pair.anomalyId} (${chanceWords(pair.p)})`);
  return listed([...named, ...(none >= WORTH_NAMING ? [`none of ${pairs.length === 1 ? 'the anomalies' : 'these'} (${chanceWords(none)})`] : [])], 'or');
}

function unsettled(finding: Finding, content: ReportContent): string {
  const named = candidates(finding, content);
  return `The search does not settle which casing it is${named && `: ${named}`}.`;
}

function doubtful(finding: Finding, content: ReportContent): string {
  const named = candidates(finding, content);
  return named ? `No anomaly is likely enough to be its casing: ${named}.` : 'No anomaly is likely to be its casing.';
}

function remains({ pRemains }: Finding): string {
  if (!Number.isFinite(pRemains)) return '';
  return `The chance that a casing as stated is still there, wherever the well may lie, is ${chanceWords(pRemains)}.`;
}

/** A row that could not be read, with what to do. */
export function unplacedSentence({ source, row, column, value, problem, advice }: UnplacedRecord): Html {
  return html`${source}, row ${row}, ${column}: <q>${value}</q>. ${sentence(problem)} ${sentence(advice)}`;
}

/** Findings to be told as such: a record without a place is told of with the rows that need mending. */
export function toldFindings({ records, findings }: ReportContent): Finding[] {
  const unplaced = new Set(records?.unplaced.map(({ recordId }) => recordId));
  return (findings?.list ?? []).filter((finding) => hasPlace(finding) || finding.recordId === '' || !unplaced.has(finding.recordId));
}

/** All findings in one sentence. */
export function headline(content: ReportContent): string {
  const list = toldFindings(content);
  const count = (word: Finding['finding']): number => list.filter(({ finding }) => finding === word).length;
  const given = list.filter(({ finding }) => finding !== 'unrecorded').length;
  const unplaced = content.records?.unplaced.length ?? 0;
  const parts = [
    [count('located'), (n: number) => `${n} ${be(n)} located`],
    [count('ambiguous'), (n: number) => `${n} ${be(n)} ambiguous`],
    [count('not_found'), (n: number) => `${n} ${n === 1 ? 'was' : 'were'} not found`],
    [count('not_searched'), (n: number) => `${n} ${be(n)} in ground not searched`],
  ] as const;
  const told = parts.filter(([n]) => n > 0).map(([n, words]) => words(n));
  const sentences = [
    ...(given > 0 ? [`Of ${counted(given, 'record')} with a place, ${listed(told)}.`] : []),
    ...(count('unrecorded') > 0 ? [`${counted(count('unrecorded'), 'casing')} on the ground ${count('unrecorded') === 1 ? 'is' : 'are'} on no record.`] : []),
    ...(unplaced > 0 ? [`${counted(unplaced, 'record')} could not be placed and ${unplaced === 1 ? 'needs' : 'need'} mending.`] : []),
  ];
  return sentences.join(' ');
}

function be(n: number): string {
  return n === 1 ? 'is' : 'are';
}
