import { UserError } from '../errors.js';
import type { GridOutput, Operation, Slot } from '../operations/types.js';
import type { Anomalies } from '../anomalies/types.js';
import type { Findings } from '../findings/types.js';
import type { SurveyPlan } from '../plan/types.js';
import type { Readings } from '../readings/types.js';
import type { Records } from '../records/types.js';
import type { Site } from '../site/types.js';
import type { Layer } from '../vector/types.js';
import { gridFiles } from './gridFiles.js';
import type { Host, SpooledFile } from './host.js';
import { anomalyLayers } from './layers/anomalyLayers.js';
import { findingLayers } from './layers/findingLayers.js';
import { planLayers } from './layers/planLayers.js';
import { recordLayers } from './layers/recordLayers.js';
import { layerFiles, type VectorFormat } from './layerFiles.js';
import { planGpx } from './planGpx.js';
import { recordTables } from './recordTables.js';
import type { AssetTrace } from './stacItem.js';
import { encodeReadings } from './readingsCsv.js';
import { encodeValue } from './valueJson.js';

/** A file as it leaves a run, with what the manifest says of it. */
export interface Delivered extends Omit<AssetTrace, 'bytes' | 'sha256'> {
  readonly content: Uint8Array | SpooledFile;
}

/** Values that the next stage starts from, exactly as they were; not layers to look at. */
export const STAGE_FOLDER = 'stages';

const TEXT = new TextEncoder();

/** Files of one role: what a GIS opens, and what the next stage reads. */
export async function deliverRole(role: string, value: unknown, options: {
  slot: Slot; operation: Operation; site: Site; host: Host; formats: readonly VectorFormat[];
}): Promise<Delivered[]> {
  const { slot, site, host, formats } = options;
  const layers = (made: readonly Layer[]): Promise<Delivered[]> => layerFiles(made, { role, site, host, formats });
  switch (slot.form) {
    case 'records': return [...await layers(recordLayers(value as Records, site)), ...recordTables(role, value as Records), stageFile(role, slot, value)];
    case 'plan': return [...await layers(planLayers(value as SurveyPlan, site)), planGpx(value as SurveyPlan, site), stageFile(role, slot, value)];
    case 'anomalies': return [...await layers(anomalyLayers(value as Anomalies, site)), stageFile(role, slot, value)];
    case 'findings': return [...await layers(findingLayers(value as Findings, site)), stageFile(role, slot, value)];
    case 'layer': return layers([value as Layer]);
    case 'readings': return readingsFiles(role, value as Readings, { slot, site });
    case 'grid': return gridFiles(role, value as GridOutput, { slot, site, host });
    case 'html': return [{ key: role, path: `${role}.html`, title: slot.title, mediaType: 'text/html', roles: [role], content: TEXT.encode(value as string) }];
    case 'json': return [{ key: role, path: `${role}.json`, title: slot.title, mediaType: 'application/json', roles: [role], content: TEXT.encode(encodeValue(value)) }];
    default: throw new UserError({ code: 'operation_invalid', where: `operation "${options.operation.id}", ${role}`, found: `the form ${JSON.stringify(slot.form)}`, wanted: 'a form that Ironplat can write' });
  }
}

function stageFile(role: string, slot: Slot, value: unknown): Delivered {
  return {
    key: `stage_${role}`, path: `${STAGE_FOLDER}/${role}.json`, title: `${slot.title}, as the next stage reads it`, mediaType: 'application/json',
    roles: ['metadata'], content: TEXT.encode(encodeValue(value)),
  };
}

function readingsFiles(role: string, readings: Readings, { slot, site }: { slot: Slot; site: Site }): Delivered[] {
  const { csv, header } = encodeReadings(readings, site);
  return [
    { key: role, path: `${role}.csv`, title: slot.title, mediaType: 'text/csv', roles: [role], epsg: site.frame.epsg, content: csv },
    stageFile(role, slot, header),
  ];
}
