import type { StreamedGrid } from '../operations/types.js';
import type { Readings } from '../readings/types.js';
import { formatUtc } from '../table/calendar.js';
import { deliverRole, type Delivered } from './deliver.js';
import type { FileDigest, Host, InputTrace, SpooledFile } from './host.js';
import type { VectorFormat } from './layerFiles.js';
import { provenanceOf, type OutputTrace } from './provenance.js';
import type { RunResult } from './runSurvey.js';
import { stacItem } from './stacItem.js';

export const MANIFEST = 'item.json';
export const PROVENANCE = 'provenance.json';

export interface Delivery {
  /** By their path in the delivered folder. */
  readonly files: ReadonlyMap<string, Uint8Array | SpooledFile>;
  /** Those of the run, and what only showed when a grid was made while it was written. */
  readonly warnings: readonly string[];
}

/**
 * All files of a run: every role's layers, the STAC Item that lists them, and the provenance that says what they were
 * made from. A single stage leaves no manifest: a run's is not replaced by part of it.
 */
export async function deliverRun(result: RunResult, options: {
  host: Host; inputs: readonly InputTrace[]; formats: readonly VectorFormat[]; relative(path: string): string; manifest: boolean;
}): Promise<Delivery> {
  const { host, formats, relative } = options;
  const delivered: Delivered[] = [];
  const warnings = new Set(result.warnings);
  for (const { operation } of result.steps) {
    for (const [role, slot] of Object.entries(operation.outputs)) {
      // An optional output that nobody asked for.
      if (!result.values.has(role)) continue;
      const value = result.values.get(role);
      delivered.push(...await deliverRole(role, value, { slot, operation, site: result.site, host, formats }));
      const remarks = slot.form === 'grid' ? (value as Partial<StreamedGrid>).remarks?.() : undefined;
      for (const note of remarks?.notes ?? []) host.progress(`${operation.id}: ${note}`);
      for (const warning of remarks?.warnings ?? []) warnings.add(`${operation.id}: ${warning}`);
    }
  }
  const traces = delivered.map(({ content, ...asset }) => ({ ...asset, ...digestOf(content, host) }));
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
  const told = { ...result, warnings: [...warnings] };
  return { files: files.set(place, json(provenanceOf(told, { inputs: options.inputs, outputs, relative }))), warnings: told.warnings };
}

function digestOf(content: Delivered['content'], host: Host): FileDigest {
  return content instanceof Uint8Array ? { bytes: content.length, sha256: host.sha256(content) } : { bytes: content.bytes, sha256: content.sha256 };
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
