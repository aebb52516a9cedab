import type { AliquotStep, FootageCalls, Side } from '../../geodesy/sections/types.js';
import type { CallText } from './calls.js';
import type { Cursor } from './cursor.js';
import type { Token } from './tokens.js';
import type { ReferenceDraft } from './townships.js';
import type { CornerName, CornerOffset, MeasuredFrom, SectionStatement } from './types.js';
import { isNorthSouth } from './words.js';

/** What a call or a tie is joined to by "of": nothing, or the part, lot or section that follows the word. */
type Link = MeasuredFrom | 'section' | null;

/** What the text has said of a section so far. */
export interface SectionDraft {
  readonly reference: ReferenceDraft;
  part: readonly AliquotStep[] | null;
  /** What the text says the centre of. */
  centre: 'part' | 'lot' | 'section' | null;
  readonly calls: CallText[];
  readonly callLinks: Link[];
  corner: { name: CornerName; offsets: readonly CornerOffset[]; link: Link } | null;
  readonly first: Token;
}

export function emptySection(first: Token): SectionDraft {
  return { reference: {}, part: null, centre: null, calls: [], callLinks: [], corner: null, first };
}

const SIDE_WORDS: Readonly<Record<Side, string>> = { N: 'north', S: 'south', E: 'east', W: 'west' };
/** Parts of real sections are up to a tenth longer than their share of a mile, mostly along the township's north and west edges (common practice). */
const PART_SLACK = 1.1;
/** Rounding of unit conversions must not refuse a call of exactly a mile. */
const ROUNDING = 1 + 1e-9;

/** Adds a call; one from the same line, from the parallel line or a third one is refused. */
export function addCall(cursor: Cursor, draft: SectionDraft, call: CallText, at: Token): void {
  const twin = draft.calls.find((each) => isNorthSouth(each.from) === isNorthSouth(call.from));
  if (twin !== undefined) {
    throw cursor.refuse(
      twin.from === call.from ? `one call from the ${SIDE_WORDS[call.from]} line` : `one call from the north or south line and one from the east or west line, not from ${SIDE_WORDS[twin.from]} and ${SIDE_WORDS[call.from]}`,
      { at },
    );
  }
  if (call.m > cursor.options.maxCallM * ROUNDING) throw cursor.refuse(`a call of at most ${feet(cursor.options.maxCallM)} ft, the length of a section`, { at });
  draft.calls.push(call);
}

const feet = (m: number): number => Math.round((m * 3937) / 1200);

/** Names the part, once; the part that calls are measured from may stand beside it. */
export function setPart(cursor: Cursor, draft: SectionDraft, steps: readonly AliquotStep[], { at, linked }: { readonly at: Token; readonly linked: boolean }): void {
  const before = draft.part;
  if (before !== null) {
    const from = draft.callLinks.concat(draft.corner?.link ?? null);
    const replaces = from.some((link) => isPart(link) && link.steps.join() === before.join());
    if (!replaces && !linked) throw cursor.refuse('one part of the section, named once', { at });
    // The part named for the calls stays with them; the one that stands by itself says where the well lies.
    if (linked) return;
  }
  draft.part = steps;
}

function isPart(link: Link): link is { readonly steps: readonly AliquotStep[] } {
  return typeof link === 'object' && link !== null;
}

/** The statement that the draft makes; refused where it is not whole or not possible. */
export function finishSection(cursor: Cursor, draft: SectionDraft): SectionStatement {
  const { reference, calls, corner, first } = draft;
  if ((reference.township === undefined) !== (reference.range === undefined)) {
    throw cursor.refuse(reference.township === undefined ? 'a township beside the range' : 'a range beside the township', { at: first });
  }
  if (calls.length === 1) {
    const [needed, has] = isNorthSouth(calls[0]!.from) ? ['east or west', 'north or south'] : ['north or south', 'east or west'];
    throw cursor.refuse(`a call from the ${needed} line beside the one from the ${has} line`, { at: first });
  }
  if (draft.centre !== null && draft.centre !== 'part' && (draft.part !== null || (draft.centre === 'section' && reference.lot !== undefined))) {
    throw cursor.refuse(`the centre of the ${draft.centre} or another part, not both`, { at: first });
  }
  return {
    kind: 'section', reference, part: draft.part === null ? null : { steps: draft.part }, centre: draft.centre !== null,
    footage: calls.length === 2 ? finishCalls(cursor, draft) : null,
    tie: corner === null ? null : { corner: corner.name, offsets: corner.offsets, of: measuredFrom(draft, corner.link) },
  };
}

function finishCalls(cursor: Cursor, draft: SectionDraft): NonNullable<SectionStatement['footage']> {
  const links = draft.callLinks.filter((link) => link !== null);
  if (links.length === 2 && key(links[0]!) !== key(links[1]!)) throw cursor.refuse('both calls from lines of the same part', { at: draft.first });
  const of = measuredFrom(draft, links[0] ?? null);
  if (typeof of === 'object') {
    for (const call of draft.calls) {
      const most = cursor.options.maxCallM * share(of.steps, isNorthSouth(call.from)) * (of.steps.length === 0 ? 1 : PART_SLACK);
      if (call.m > most * ROUNDING) {
        throw cursor.refuse(`a call of at most ${feet(most)} ft from the ${SIDE_WORDS[call.from]} line of the part`, { at: draft.first, advice: 'name the section if the call is from its line' });
      }
    }
  }
  const [one, two] = draft.calls as [CallText, CallText];
  const calls: FootageCalls = [footage(one), footage(two)];
  return { calls, of };
}

const footage = ({ m, resolutionM, from }: CallText): FootageCalls[0] => ({ distanceM: m, resolutionM, from });
const key = (link: NonNullable<Link>): string => (isPart(link) ? link.steps.join() || 'section' : link);

/** Where no word joins them, calls are the section's if the text names no part and no lot; else it leaves that open. */
function measuredFrom({ part, reference }: SectionDraft, link: Link): MeasuredFrom {
  if (link === 'section') return { steps: [] };
  if (link !== null) return link;
  return part === null && reference.lot === undefined ? { steps: [] } : 'unsaid';
}

/** Share of a section's side that a part has, north to south or east to west. */
function share(steps: readonly AliquotStep[], northSouth: boolean): number {
  let left = 1;
  for (const step of steps) {
    if (step.length === 2 && step[1] === '2') left *= isNorthSouth(step[0] as Side) === northSouth ? 0.5 : 1;
    else left *= 0.5;
  }
  return left;
}
