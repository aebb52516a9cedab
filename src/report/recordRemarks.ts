import type { Records } from '../records/types.js';

/** What a person has to look at in the records, one row a remark, the same in the report and in its table. */
export interface RecordRemark {
  readonly kind: 'not placed' | 'disagreement' | 'repair applied' | 'repair proposed' | 'joined' | 'API number';
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  readonly text: string;
}

export function recordRemarks(records: Records): RecordRemark[] {
  const { unplaced, disagreements = [], repairs = [], joined = [], apiRemarks = [] } = records;
  return [
    ...unplaced.map((one): RecordRemark => ({ ...where(one), kind: 'not placed', text: `${one.column} "${one.value}": ${one.problem}; ${one.advice}` })),
    ...repairs.map((one): RecordRemark => ({
      ...where(one), kind: one.applied ? 'repair applied' : 'repair proposed',
      text: `${one.what} in ${one.column}: "${one.before}" to "${one.after}"; ${one.evidence}`,
    })),
    ...disagreements.map((one): RecordRemark => ({
      ...where(one), kind: 'disagreement',
      text: `${one.other} lies ${one.distanceM.toFixed(1)} m from ${one.kept}; right statements lie so far apart with a chance of ${one.p.toPrecision(2)}`,
    })),
    ...joined.map((one): RecordRemark => ({ ...where(one), kind: 'joined', text: `joined into ${one.into}, ${one.distanceM.toFixed(1)} m away: ${one.why}` })),
    ...apiRemarks.map((one): RecordRemark => ({ ...where(one), kind: 'API number', text: `"${one.value}": ${one.remark}` })),
  ];
}

type Row = { readonly recordId: string; readonly source: string; readonly row: number };

function where({ recordId, source, row }: Row): Row {
  return { recordId, source, row };
}
