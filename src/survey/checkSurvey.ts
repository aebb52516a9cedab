import { camelKeys } from '../operations/camelKeys.js';
import { readParameters } from '../operations/readParameters.js';
import type { Operation, Schema } from '../operations/types.js';
import { makeSite, type SiteSettings } from '../site/makeSite.js';
import type { Host } from './host.js';
import type { Survey } from './readSurvey.js';

/**
 * Checks a survey file before anything runs: the ground can be read, every section fits its operation, every file that
 * a section names is there. Throws on the first thing that is wrong. Returns what was found, in words.
 */
export async function checkSurvey(survey: Survey, { operations, host }: { operations: readonly Operation[]; host: Host }): Promise<string[]> {
  const lines: string[] = [];
  const site = await makeSite(camelKeys<SiteSettings>(survey.common), { files: host.files, where: survey.where, warn: (message) => lines.push(`warning: ${message}`) });
  const { totalNT, inclinationDeg, declinationDeg, convergenceDeg } = site.mainField;
  lines.push(
    `frame: ${site.frame.code}, ${site.frame.name}, in ${site.frame.unit}; grid convergence ${convergenceDeg.toFixed(2)}°`,
    `main field: ${totalNT.toFixed(0)} nT, inclination ${inclinationDeg.toFixed(1)}°, declination ${declinationDeg.toFixed(1)}°`,
    `to WGS 84: ${describePlace(site)}`,
    `target: pole ${site.target.poleAM.join(' to ')} A·m, top ${site.target.depthM.join(' to ')} m below ground (${site.target.basis})`,
  );
  for (const operation of operations) {
    const section = survey.sections[operation.id];
    if (section === undefined || section === false) continue;
    const parameters = readParameters(section, operation.parameters, { where: `${survey.where}, ${operation.id}`, resolve: survey.resolve });
    for (const path of pathsIn(parameters, operation.parameters)) {
      const bytes = await host.files.read(path);
      lines.push(`${operation.id}: ${path} can be read (${bytes.length} bytes)`);
    }
  }
  return lines;
}

function describePlace(site: Awaited<ReturnType<typeof makeSite>>): string {
  const [x, y] = site.parcel[0]![0]![0]!;
  const { shift, sdM, sharedSdM } = site.toWgs84.place(...site.frame.inverse(x, y));
  return `${shift}, standard error ${Math.hypot(sdM, sharedSdM).toFixed(2)} m an axis`;
}

function pathsIn(value: unknown, schema: Schema): string[] {
  if (schema['x-path']) return typeof value === 'string' ? [value] : [];
  if (Array.isArray(value)) return schema.items ? value.flatMap((item) => pathsIn(item, schema.items!)) : [];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, inner]) => (schema.properties?.[key] ? pathsIn(inner, schema.properties[key]) : []));
}
