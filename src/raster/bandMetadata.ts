import { UserError } from '../errors.js';
import { readItem, type BandMetadata } from './gdalMetadata.js';
import type { GridStatistics } from './gridStatistics.js';
import { TAG } from './tiffTags.js';
import type { ReadDirectory } from './tiffDirectories.js';

const ITEM = /<Item\s([^>]*)>([^<]*)<\/Item>/g;
const ATTRIBUTE = /(\w+)\s*=\s*"([^"]*)"/g;

/** What a file says of its first band: the metadata that GDAL keeps in a tag of its own. Statistics only where all five are there. */
export function bandMetadata(directory: ReadDirectory): BandMetadata {
  const items = new Map<string, string>();
  for (const [, attributes, text] of textOf(directory, TAG.gdalMetadata).matchAll(ITEM)) {
    const named = new Map([...attributes!.matchAll(ATTRIBUTE)].map(([, name, value]) => [name!, value!]));
    if ((named.get('sample') ?? '0') === '0') items.set((named.get('name') ?? '').toUpperCase(), readItem(text!));
  }
  const number = (name: string, otherwise: number): number => {
    const stated = Number(items.get(name) ?? NaN);
    return Number.isFinite(stated) ? stated : otherwise;
  };
  const statistics: GridStatistics = {
    minimum: number('STATISTICS_MINIMUM', NaN), maximum: number('STATISTICS_MAXIMUM', NaN), mean: number('STATISTICS_MEAN', NaN),
    standardDeviation: number('STATISTICS_STDDEV', NaN), validPercent: number('STATISTICS_VALID_PERCENT', NaN),
  };
  return {
    description: items.get('DESCRIPTION') ?? '', unit: items.get('UNITTYPE') ?? '', scale: number('SCALE', 1), offset: number('OFFSET', 0),
    statistics: Object.values(statistics).some(Number.isNaN) ? null : statistics,
  };
}

/** The number that stands for a cell without a value; NaN where none does. */
export function nodataOf(directory: ReadDirectory, where: string): number {
  const text = textOf(directory, TAG.gdalNodata).trim();
  if (text === '' || /^[+-]?nan$/i.test(text)) return NaN;
  const infinite = /^([+-]?)inf(?:inity)?$/i.exec(text);
  const number = infinite ? Number(`${infinite[1]}Infinity`) : Number(text);
  if (Number.isNaN(number)) throw new UserError({ code: 'grid_file_invalid', where, found: `the nodata value ${JSON.stringify(text.slice(0, 40))}`, wanted: 'a number or nan' });
  return number;
}

function textOf(directory: ReadDirectory, id: number): string {
  const bytes = Uint8Array.from(directory.tags.get(id)?.values ?? []);
  const end = bytes.indexOf(0);
  return new TextDecoder().decode(end < 0 ? bytes : bytes.subarray(0, end));
}
