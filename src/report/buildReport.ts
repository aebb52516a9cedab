import { areaM2 } from '../density/area.js';
import { accuracySection } from './accuracySection.js';
import { anomaliesSection } from './anomaliesSection.js';
import { digSection, findingsSection } from './findingsSection.js';
import { blindSection, cautionsSection, endSections } from './fixedSections.js';
import { number } from './format.js';
import { foundSection } from './foundSection.js';
import { html, type Html } from './html.js';
import { detectionMap, residualMap } from './maps.js';
import { recordsSection } from './recordsSection.js';
import { STYLE } from './style.js';
import { REPORT_DEFAULTS, type ReportContent, type ReportOptions } from './types.js';
import { planSection, reductionSection } from './workSections.js';

/**
 * The review document: one HTML file with its pictures and its style in it. It fetches nothing, runs nothing and needs
 * no clock, so equal contents give equal bytes. Every text from outside is escaped.
 */
export function buildReport(content: ReportContent, options: Partial<ReportOptions> = {}): string {
  const settings: ReportOptions = { ...REPORT_DEFAULTS, ...options };
  const title = settings.title || content.site.title;
  const { markup } = html`<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>${title}: search for wells</title>
<style>${STYLE}</style>
</head>
<body>
${head(content, title, settings)}
<main>
${settings.note && html`<p class="note">${settings.note}</p>`}
${foundSection(content)}
<section id="maps">
<h2>Maps</h2>
${residualMap(content, settings)}
${detectionMap(content, settings)}
</section>
${findingsSection(content)}
${digSection(content)}
${recordsSection(content)}
${anomaliesSection(content)}
${reductionSection(content)}
${planSection(content)}
${blindSection(content)}
${accuracySection(content)}
${cautionsSection()}
${endSections(content)}
</main>
</body>
</html>
`;
  return markup;
}

function head({ site, findings, records, anomalies, readings, plan }: ReportContent, title: string, { preparedFor, preparedBy }: ReportOptions): Html {
  const facts: ReadonlyArray<readonly [string, string]> = [
    ['Field work', dayOf(site.decimalYear)],
    ['Parcel', `${number(areaM2(site.parcel) / 10_000, 1)} ha, ${number(areaM2(site.open) / 10_000, 1)} ha of it open`],
    ['Coordinates', `${site.frame.name} (${site.frame.code})`],
    ...(preparedFor ? [['Prepared for', preparedFor] as const] : []),
    ...(preparedBy ? [['Prepared by', preparedBy] as const] : []),
  ];
  const links: ReadonlyArray<readonly [string, string, unknown]> = [
    ['found', 'What was found', true], ['maps', 'Maps', true], ['findings', 'Findings', findings], ['dig', 'Where to dig', findings],
    ['records', 'Records', records], ['anomalies', 'Anomalies', anomalies], ['reduction', 'Readings', readings], ['plan', 'Plan', plan],
    ['blind', 'What magnetics cannot see', true], ['accuracy', 'Accuracy', true], ['cautions', 'Cautions', true],
  ];
  return html`
<header>
<p class="kind">Magnetic search for wells</p>
<h1>${title}</h1>
<dl class="facts">${facts.map(([name, value]) => html`<div><dt>${name}</dt><dd>${value}</dd></div>`)}</dl>
<nav aria-label="Contents"><ul>${links.filter(([, , there]) => there).map(([id, name]) => html`<li><a href="#${id}">${name}</a></li>`)}</ul></nav>
</header>`;
}

/** The day that a decimal year stands for, as 14 April 2026. */
function dayOf(decimalYear: number): string {
  const year = Math.floor(decimalYear);
  const day = Math.round((decimalYear - year) * 365);
  const date = new Date(Date.UTC(year, 0, 1 + day));
  const months = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December'];
  return `${date.getUTCDate()} ${months[date.getUTCMonth()]!} ${date.getUTCFullYear()}`;
}
