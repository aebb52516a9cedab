import type { Anomalies } from '../anomalies/types.js';
import type { Finding, Findings } from '../findings/types.js';
import type { SurveyPlan } from '../plan/types.js';
import type { Records, UnplacedRecord } from '../records/types.js';
import { plainText } from '../report/html.js';
import { findingSentence, headline, unplacedSentence } from '../report/sentences.js';
import type { ReportContent } from '../report/types.js';
import type { RunResult } from './runSurvey.js';

export interface RunSummary {
  /** The result in plain words, a line each. */
  readonly sentences: readonly string[];
  readonly findings: readonly Finding[];
  readonly unplaced: readonly UnplacedRecord[];
  readonly warnings: readonly string[];
  readonly skipped: RunResult['skipped'];
}

/** Said wherever a place to dig is given. */
const CAUTION = 'Before anybody digs: have buried lines marked by the local one-call service, expect gas, keep fire away, and follow local codes and licensed practice.';

/** What a run found and what it did not, in the words of the report. */
export function summarise({ site, values, warnings, skipped }: RunResult): RunSummary {
  const records = values.get('records') as Records | undefined;
  const findings = values.get('findings') as Findings | undefined;
  const anomalies = values.get('anomalies') as Anomalies | undefined;
  const plan = values.get('plan') as SurveyPlan | undefined;
  const content: ReportContent = { site, ...(records ? { records } : {}), ...(findings ? { findings } : {}), ...(anomalies ? { anomalies } : {}) };
  const unplaced = records?.unplaced ?? [];
  const toDig = findings?.list.some(({ digOrder }) => digOrder > 0) ?? false;
  const missing = skipped.filter(({ chosen }) => !chosen).map(({ id, why }) => `Not run: ${id} (${why}).`);
  return {
    sentences: [
      site.title,
      ...(findings ? [headline(content)] : []),
      ...placed(findings).map((finding) => `  ${finding.recordId || finding.anomalyId} ${finding.finding.replace('_', ' ')}: ${plainText(findingSentence(finding, content))}`),
      ...unplaced.map((record) => `  ${record.recordId || 'a row without a name'} not placed: ${plainText(unplacedSentence(record))}`),
      ...(plan && !findings ? plan.notes.slice(0, 1) : []),
      ...missing,
      ...(toDig ? [CAUTION] : []),
    ],
    findings: findings?.list ?? [], unplaced, warnings, skipped,
  };
}

/** Records without a place are told of with their row and what to do, not twice. */
function placed(findings: Findings | undefined): Finding[] {
  return (findings?.list ?? []).filter(({ x }) => Number.isFinite(x));
}
