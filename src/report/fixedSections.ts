import { number } from './format.js';
import { html, type Html } from './html.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

/** What no magnetometer hears, whatever the chances say. */
export function blindSection({ site }: ReportContent): Html {
  const [weak] = site.target.poleAM;
  const [, deep] = site.target.depthM;
  return html`
<section id="blind">
<h2>What magnetics cannot see</h2>
<p>A magnetometer hears steel. It does not hear a hole. A well may be where nothing was found, if</p>
<ul>
<li>its casing was <b>pulled</b> when it was abandoned;</li>
<li>its casing was <b>cut off below reach</b>, deeper than the ${number(deep, 1)} m looked for here;</li>
<li>it was <b>never of steel</b>, such as a wooden conductor or an open hole;</li>
<li>its casing is magnetised more weakly than the ${number(weak)} A·m looked for here;</li>
<li>it lies beside stronger iron (a pipeline, a tank, a building, a fence) that drowns it;</li>
<li>it lies where nobody walked.</li>
</ul>
<p><b>Not found is not the same as not there.</b> The chance that remains is stated for each record above.</p>
</section>`;
}

/** What to mind before anybody digs. */
export function cautionsSection(): Html {
  return html`
<section id="cautions" class="cautions">
<h2>Cautions</h2>
<ul>
<li><b>Before any digging, call the local one-call service</b> (811 in the United States) and wait until buried lines are marked. An anomaly that this report takes for a pipe or cable may be in use and under pressure or voltage; so may one that it takes for something else.</li>
<li><b>Old wells give off gas.</b> Methane burns and explodes; hydrogen sulphide kills in low concentrations and dulls the sense of smell; both can fill a hole. Measure with a gas meter before and during the work, come from upwind, and do not enter an excavation without the precautions for confined spaces.</li>
<li><b>No ignition sources</b> near a well or an open excavation: no flame, no smoking, no spark, no running engine that is not rated for it.</li>
<li><b>Dig by hand or by vacuum</b> near the casing. A bucket can break a wellhead or an old plug and start a flow. Have a plan for one.</li>
<li>The ground over an old well can be hollow. Keep people and machines off until it has been probed, and fence an open casing.</li>
<li><b>Unexploded ordnance was not assessed.</b> Where there may be some, dig for no anomaly before it is.</li>
<li><b>Licensed practice and local codes prevail.</b> Locating, opening, testing and plugging wells is regulated, and so are boundary surveys. This report is neither a boundary survey nor a certificate that ground is free of wells.</li>
</ul>
</section>`;
}

/** What was warned of, the files, the methods and what it was made with. */
export function endSections({ warnings, files, sources, provenance }: ReportContent): Html {
  return html`
${warnings && warnings.length > 0 && html`
<section id="warnings">
<h2>Warnings</h2>
<ul>${warnings.map((warning) => html`<li>${warning}</li>`)}</ul>
</section>`}
${files && html`
<section id="files">
<h2>Files</h2>
${table(files, [
    { head: 'File', names: true, cell: ({ name }) => html`<code>${name}</code>` },
    { head: 'Format', cell: ({ format }) => format },
    { head: 'What it holds', cell: ({ title }) => title },
  ], { caption: 'They lie beside this report and open in any GIS.', none: 'No other files.' })}
</section>`}
${sources && sources.length > 0 && html`
<section id="sources">
<h2>Methods and their sources</h2>
<ul class="sources">${sources.map((source) => html`<li>${source}</li>`)}</ul>
</section>`}
${provenance && html`
<section id="provenance">
<h2>How this was made</h2>
<p>Ironplat ${provenance.version}, seed ${provenance.seed}. Steps: ${provenance.operations.map(({ id, version }, i) => `${i > 0 ? ', ' : ''}${id} ${version}`)}. The same inputs give the same report, byte for byte; what was put in, with every parameter, stands in <code>provenance.json</code> beside it.</p>
</section>`}`;
}
