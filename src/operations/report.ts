import type { ReportContent, ReportOptions } from '../report/types.js';
import { buildReport } from '../report/buildReport.js';
import { reportFiles } from '../report/reportFiles.js';
import { REPORT_DEFAULTS as D } from '../report/types.js';
import { VERSION } from '../version.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema } from './schema.js';
import type { Operation, Task } from './types.js';

type Told = Omit<ReportContent, 'site' | 'warnings' | 'files' | 'sources' | 'provenance'>;

/** Everything that was found, and how, to one document. */
export const report: Operation = {
  id: 'report',
  version: '1.0.0',
  title: 'Everything found to one document',
  summary: 'Writes one HTML file with what was found in plain words, maps, tables, where to dig, what the search cannot see and what to mind. It fetches nothing and prints well.',
  parameters: objectSchema({
    title: { type: 'string', default: D.title, description: 'In place of the survey\'s title.' },
    prepared_for: { type: 'string', default: D.preparedFor, description: 'Name that stands in the head.' },
    prepared_by: { type: 'string', default: D.preparedBy, description: 'Name that stands in the head.' },
    note: { type: 'string', default: D.note, description: 'A paragraph that stands before the findings.' },
    picture_cells: { type: 'integer', minimum: 16, maximum: 8000, default: D.pictureCells, description: 'Most cells along a picture\'s longer side; a larger grid is shown by means.' },
  }),
  inputs: {
    records: { title: 'Positions of the records', form: 'records', optional: true },
    plan: { title: 'Survey plan', form: 'plan', optional: true },
    readings: { title: 'Reduced readings', form: 'readings', optional: true },
    residual: { title: 'Residual grid', form: 'grid', unit: 'nT', optional: true },
    detection: { title: 'Chance of detection', form: 'grid', unit: '1', optional: true },
    anomalies: { title: 'Anomalies', form: 'anomalies', optional: true },
    findings: { title: 'Findings', form: 'findings', optional: true },
  },
  outputs: { report: { title: 'Review document', form: 'html' } },
  sources: ['Ottosson (2020), A perceptual color space for image processing', 'Douglas & Peucker (1973), Reduction of the number of points of a line, Cartographica 10'],
  example: 'ironplat report --survey survey.json --out delivery',
  run: async ({ site, parameters, inputs, seed, before }) => {
    const told: ReportContent = { site, ...(inputs as Told) };
    const operations = before?.operations ?? [];
    const content: ReportContent = {
      ...told,
      warnings: before?.warnings ?? [],
      files: reportFiles(told),
      sources: sourcesOf(operations),
      provenance: { version: VERSION, seed, operations: [...operations, report].map(({ id, version }) => ({ id, version })) },
    };
    return { report: buildReport(content, camelKeys<Partial<ReportOptions>>(parameters)) };
  },
};

/** Each source once, in the order of the work. */
function sourcesOf(operations: NonNullable<Task['before']>['operations']): string[] {
  return [...new Set([...operations, report].flatMap(({ sources }) => sources))];
}
