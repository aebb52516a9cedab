import type { Finding, FindingWord } from '../findings/types.js';
import { counted, number } from './format.js';
import { html, type Html } from './html.js';
import { findingSentence, headline, toldFindings, unplacedSentence } from './sentences.js';
import { FINDING_WORDS, findingSign } from './symbols.js';
import type { ReportContent } from './types.js';

/** The order in which findings are told: what can be acted on comes first. */
const ORDER: readonly FindingWord[] = ['located', 'unrecorded', 'ambiguous', 'not_found', 'not_searched'];

/** What was found, in plain words. */
export function foundSection(content: ReportContent): Html {
  const { findings, records } = content;
  const list = toldFindings(content);
  const unplaced = records?.unplaced ?? [];
  return html`
<section id="found">
<h2>What was found</h2>
${findings ? html`<p class="lead">${headline(content) || 'There was no record to look for, and no casing was found.'}</p>` : html`<p class="lead">Records have not been matched with anomalies yet: ${missing(content)}.</p>`}
${(list.length > 0 || unplaced.length > 0) && tally(list, unplaced.length)}
${searched(content)}
${ORDER.map((word) => group(word, list.filter(({ finding }) => finding === word), content))}
${unplaced.length > 0 && html`
<h3>${findingSign('unplaced')} Could not be placed</h3>
<dl class="told">${unplaced.map((record) => html`<div><dt>${record.recordId || `row ${record.row}`}</dt><dd>${unplacedSentence(record)}</dd></div>`)}</dl>`}
${(findings?.notes.length ?? 0) > 0 && html`<ul class="notes">${findings!.notes.map((note) => html`<li>${note}</li>`)}</ul>`}
</section>`;
}

function missing({ records, anomalies, readings }: ReportContent): string {
  if (!readings) return 'there are no readings';
  if (!anomalies) return 'no anomalies were delineated';
  return records ? 'that step was not run' : 'there are no records';
}

function tally(list: readonly Finding[], unplaced: number): Html {
  const entries: ReadonlyArray<[FindingWord | 'unplaced', string, number]> = [
    ...ORDER.map((word): [FindingWord, string, number] => [word, FINDING_WORDS[word], list.filter(({ finding }) => finding === word).length]),
    ['unplaced', 'not placed', unplaced],
  ];
  return html`<ul class="tally" aria-label="Number of findings of each kind">${entries.map(([word, name, count]) => html`<li class="is-${word}${count === 0 && ' none'}">${findingSign(word)}<span><b>${count}</b> ${name}</span></li>`)}</ul>`;
}

/** How well the open ground was searched, on the whole. */
function searched({ detection, site }: ReportContent): Html | null {
  if (!detection) return null;
  let sum = 0;
  let cells = 0;
  for (const chance of detection.values) {
    if (Number.isNaN(chance)) continue;
    sum += chance;
    cells += 1;
  }
  if (cells === 0) return null;
  const hectares = (cells * detection.cellM ** 2) / 10_000;
  const [weak, strong] = site.target.poleAM;
  const [shallow, deep] = site.target.depthM;
  return html`<p>Looked for: the top of a steel casing with a pole strength of ${number(weak)} to ${number(strong)} A·m at ${number(shallow, 1)} to ${number(deep, 1)} m below ground (${site.target.basis}). On ${number(hectares, 1)} ha of open ground such a casing, put down anywhere, would have been detected with a chance of ${Math.round((100 * sum) / cells)} %, on average.</p>`;
}

function group(word: FindingWord, list: readonly Finding[], content: ReportContent): Html | null {
  if (list.length === 0) return null;
  const title: Readonly<Record<FindingWord, string>> = {
    located: 'Located', unrecorded: 'Casings on no record', ambiguous: 'Ambiguous', not_found: 'Not found', not_searched: 'Not searched',
  };
  return html`
<h3>${findingSign(word)} ${title[word]}<span class="count">${counted(list.length, word === 'unrecorded' ? 'casing' : 'record')}</span></h3>
<dl class="told">${list.map((finding) => html`<div><dt>${finding.recordId || finding.anomalyId}</dt><dd>${findingSentence(finding, content)}</dd></div>`)}</dl>`;
}
