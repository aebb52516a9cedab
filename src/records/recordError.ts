import type { LocateContext } from './locateContext.js';
import type { Fault, RawRecord } from './rawRecord.js';
import { SOURCE_CLASSES, sourceError, type SourceClass, type SourceError } from './sourceError.js';

/** Words for source classes as they stand in files, lower case; the classes' own names stand for themselves. */
const WORDS: Readonly<Record<string, SourceClass>> = {
  survey: 'surveyed', 'licensed survey': 'surveyed', 'instrument survey': 'surveyed', 'land survey': 'surveyed', plat: 'surveyed', 'survey grade gps': 'surveyed', rtk: 'surveyed',
  'gps receiver': 'gps', 'handheld gps': 'gps', 'hand-held gps': 'gps', 'hand held gps': 'gps', gnss: 'gps',
  spotted: 'map', 'spotted from map': 'map', 'spotted on map': 'map', 'topo map': 'map', topo: 'map', quad: 'map', 'quad map': 'map', 'map interpolation': 'map', digitized: 'map', digitised: 'map', scaled: 'map', 'scaled from map': 'map',
  'footage call': 'footage', 'footage calls': 'footage', footages: 'footage', calculated: 'footage',
  unk: 'unknown', 'not stated': 'unknown', other: 'unknown', '?': 'unknown',
};

/** Error of a row's coordinates: stated in the row, else in the file, else by the row's class, else by the file's. */
export function recordError(raw: RawRecord, { source, settings }: Pick<LocateContext, 'source' | 'settings'>): SourceError | Fault {
  const sourceClass = raw.sourceText === '' ? settings.source : classOf(raw.sourceText);
  if (sourceClass === null) {
    return {
      column: settings.columns?.source ?? 'source', value: raw.sourceText, problem: `"${raw.sourceText}" is no source class`,
      advice: `write one of ${SOURCE_CLASSES.join(', ')}, or leave the cell blank for the file's`,
    };
  }
  const row = raw.errorM !== null || raw.error90M !== null || raw.error95M !== null;
  const stated = row ? raw : { errorM: settings.errorM ?? null, error90M: settings.error90M ?? null, error95M: settings.error95M ?? null };
  return sourceError(stated, {
    class: sourceClass, mapScale: settings.mapScale ?? null, classSdM: settings.classErrors?.[sourceClass] ?? null,
  }, row ? `${source.name}, row ${raw.row}` : source.name);
}

function classOf(text: string): SourceClass | null {
  const word = text.toLowerCase().replace(/[_\s]+/g, ' ').trim();
  return SOURCE_CLASSES.find((each) => each === word) ?? (Object.hasOwn(WORDS, word) ? WORDS[word]! : null);
}
