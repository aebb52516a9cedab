import type { Readings } from '../readings/types.js';
import { formatUtc } from '../table/calendar.js';
import { deliverRole, type Delivered } from './deliver.js';
import type { Host, InputTrace } from './host.js';
import type { VectorFormat } from './layerFiles.js';
import { provenanceOf, type OutputTrace } from './provenance.js';
import type { RunResult } from './runSurvey.js';
import { stacItem } from './stacItem.js';

export const MANIFEST = 'item.json';
export const PROVENANCE = 'provenance.json';

/**
 * All files of a run by their path in the delivered folder: every role's layers, the STAC Item that lists them, and
 * the provenance that says what they were made from. A single stage leaves no manifest: a run's is not replaced by part of it.
 */
export async function deliverRun(result: RunResult, options: {
  host: Host; inputs: readonly InputTrace[]; formats: readonly VectorFormat[]; relative(path: string): string; manifest: boolean;
}): Promise<Map<string, Uint8Array>> {
  const { host, formats, relative } = options;
  const delivered: Delivered[] = [];
  for (const { operation } of result.steps) {
    for (const [role, slot] of Object.entries(operation.outputs)) {
      if (!result.values.has(role)) continue;
      // An optional output that nobody asked for.
      if (slot.optional && !result.values.has(role)) continue;
      delivered.push(...await deliverRole(role, result.values.get(role), { slot, operation, site: result.site, host, formats }));
    }
  }
  const traces = delivered.map(({ content, ...asset }) => ({ ...asset, bytes: content.length, sha256: host.sha256(content) }));
  const files = new Map(delivered.map(({ path, content }) => [path, content]));
  const outputs: OutputTrace[] = traces.map(({ path, bytes, sha256 }) => ({ path, bytes, sha256 }));
  if (options.manifest) {
    const span = timeSpan(result.values.get('readings') as Readings | undefined);
    const item = json(stacItem(result.site, traces, {
      id: identifier(result.site.title), ...span, date: result.survey.common.date as string,
      steps: result.steps.map(({ operation }) => operation),
    }));
    files.set(MANIFEST, item);
    outputs.push({ path: MANIFEST, bytes: item.length, sha256: host.sha256(item) });
  }
  const place = options.manifest ? PROVENANCE : `stages/${result.steps.map(({ operation }) => operation.id).join('-')}.provenance.json`;
  return files.set(place, json(provenanceOf(result, { inputs: options.inputs, outputs, relative })));
}

function timeSpan(readings: Readings | undefined): { start: string | null; end: string | null } {
  let [first, last] = [Infinity, -Infinity];
  for (const time of readings?.timeS ?? []) {
    if (time < first) first = time;
    if (time > last) last = time;
  }
  return first <= last ? { start: formatUtc(first, 0), end: formatUtc(last, 0) } : { start: null, end: null };
}

/** The title as an identifier that a catalogue can use. */
function identifier(title: string): string {
  return title.toLowerCase().replace(/[^a-z0-9]+/g, '-').replace(/^-|-$/g, '') || 'survey';
}

function json(value: unknown): Uint8Array {
  return new TextEncoder().encode(`${JSON.stringify(value, null, 2)}\n`);
}
