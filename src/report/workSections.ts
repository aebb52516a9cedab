import { areaM2 } from '../density/area.js';
import type { SurveyPlan } from '../plan/types.js';
import { FLAGS, type Readings } from '../readings/types.js';
import { formatUtc } from '../table/calendar.js';
import { chanceCell, counted, frameUnit, length, number, sentence } from './format.js';
import { html, type Html } from './html.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

/** What was taken off the readings, step by step, and what was left out. */
export function reductionSection({ readings }: ReportContent): Html | null {
  if (!readings) return null;
  const flags = FLAGS.map((word, code) => ({ word, count: readings.flag.reduce((sum, flag) => sum + (flag === code ? 1 : 0), 0) }));
  const out = flags.filter(({ word, count }) => word !== '' && count > 0);
  return html`
<section id="reduction">
<h2>Readings and their reduction</h2>
<p>${counted(readings.count, 'reading')} on ${counted(readings.lineNames.length, 'line')}${span(readings)}. ${counted(flags[0]!.count, 'reading')} used${out.length > 0 ? html`; left out: ${out.map(({ word, count }, i) => `${i > 0 ? ', ' : ''}${number(count)} ${word.replaceAll('_', ' ')}`)}` : ''}.</p>
${table(readings.steps, [
    { head: 'Step', names: true, cell: ({ title }) => title },
    { head: 'Column', cell: ({ column }) => html`<code>${column}</code>` },
    { head: 'What it removed', cell: ({ summary }) => sentence(summary) },
  ], { caption: 'In this order. The field after each step stands in the readings’ file, in the column named.', none: 'No step was applied.' })}
${readings.warnings.length > 0 && html`<ul class="notes">${readings.warnings.map((warning) => html`<li>${sentence(warning)}</li>`)}</ul>`}
</section>`;
}

function span({ timeS }: Readings): string {
  let [first, last] = [Infinity, -Infinity];
  for (const time of timeS) {
    if (time < first) first = time;
    if (time > last) last = time;
  }
  if (!(first <= last)) return '';
  return `, ${toTheMinute(first)} to ${toTheMinute(last)} UTC`;
}

function toTheMinute(timeS: number): string {
  return formatUtc(timeS).slice(0, 16).replace('T', ' ');
}

/** What was planned, and what it promised. */
export function planSection({ plan, site, findings }: ReportContent): Html | null {
  if (!plan) return null;
  const unit = frameUnit(site.frame);
  const survey = plan.lines.filter(({ kind }) => kind === 'survey');
  const tie = plan.lines.filter(({ kind }) => kind === 'tie');
  return html`
<section id="plan">
<h2>Plan</h2>
<p>${number(areaM2(plan.searchArea) / 10_000, 2)} ha to be searched, lines ${length(plan.spacingM, unit)} apart, ${number(plan.lineAzimDeg)}° from grid north. ${counted(survey.length, 'line')} (${total(survey)} km) and ${counted(tie.length, 'tie line')} (${total(tie)} km), in ${counted(new Set(plan.lines.map(({ sortie }) => sortie)).size, 'outing')}.</p>
${table(plan.chances, [
    { head: 'Record', names: true, cell: ({ recordId }) => recordId },
    { head: 'Planned: covered', kind: 'number', cell: ({ pCovered }) => chanceCell(pCovered) },
    { head: 'Planned: detected', kind: 'number', cell: ({ pDetect }) => chanceCell(pDetect) },
    { head: 'As walked: covered', kind: 'number', cell: ({ recordId }) => chanceCell(findings?.list.find((finding) => finding.recordId === recordId)?.pCovered ?? NaN) },
    { head: 'As walked: detected', kind: 'number', cell: ({ recordId }) => chanceCell(findings?.list.find((finding) => finding.recordId === recordId)?.pDetect ?? NaN) },
  ], { caption: 'What the plan promised for each record, beside what the lines came to as they were really walked, with the noise that was really met.', none: 'No record to plan for.' })}
${plan.notes.length > 0 && html`<ul class="notes">${plan.notes.map((note) => html`<li>${sentence(note)}</li>`)}</ul>`}
</section>`;
}

function total(lines: SurveyPlan['lines']): string {
  return number(lines.reduce((sum, { lengthM }) => sum + lengthM, 0) / 1000, 1);
}
