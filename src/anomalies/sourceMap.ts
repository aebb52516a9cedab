import type { NoiseModel } from '../detection/types.js';
import type { Fit, Window } from './fitSources.js';
import { anomalyAt } from './sourceField.js';
import { placeOf, type Source } from './sources.js';
import { blocksNear, windowOf, type Survey } from './survey.js';
import { STATES } from './wander.js';

/** A source on the map, with what it makes at the blocks around it. */
export interface Entry {
  /** Order in which it was found, from 0. */
  readonly id: number;
  source: Source;
  index: Int32Array;
  made: Float64Array;
}

/** A source is faded out between so many windows away and so many, so that no edge shows. */
const FADE_FROM = 2;
const FADE_TO = 3;
/** An endless line stands for a piece of pipe: it is subtracted in its own window only. */
const LINE_FADE_FROM = 0.8;
const LINE_FADE_TO = 1.2;
/** A fit's position errors replace older ones where its sources are at least this share as steep. */
const STEEPER = 0.5;

/** What has been found so far: the sources, what they make together at each block, and where the blocks truly lie. */
export class SourceMap {
  readonly entries: Entry[] = [];
  /** Sum over all sources at each block, nT. */
  readonly made: Float64Array;
  /** Slope of the sources at each block when its position error was last estimated, nT/m. */
  readonly steepness: Float64Array;
  readonly #shift: Float64Array;
  #next = 0;

  constructor(readonly survey: Survey) {
    this.made = new Float64Array(survey.blocks.count);
    this.steepness = new Float64Array(survey.blocks.count);
    this.#shift = new Float64Array(3 * survey.blocks.count);
  }

  add(source: Source): Entry {
    const entry: Entry = { id: this.#next++, source, index: new Int32Array(0), made: new Float64Array(0) };
    this.entries.push(entry);
    this.#make(entry);
    return entry;
  }

  remove(entry: Entry): void {
    this.#unmake(entry);
    this.entries.splice(this.entries.indexOf(entry), 1);
  }

  move(entry: Entry, source: Source): void {
    this.#unmake(entry);
    entry.source = source;
    this.#make(entry);
  }

  /** Takes over the position errors that a fit found. */
  learn(window: Window, fit: Fit): void {
    for (let k = 0; k < window.count; k++) {
      const i = window.index[k]!;
      const steep = Math.hypot(fit.model.slopeX[k]!, fit.model.slopeY[k]!);
      if (steep < STEEPER * this.steepness[i]!) continue;
      this.steepness[i] = steep;
      for (let axis = 0; axis < 3; axis++) this.#shift[3 * i + axis] = fit.states[k * STATES + axis]!;
    }
  }

  /** Sources whose place lies within `radiusM`, nearest first. */
  near(x: number, y: number, radiusM: number): Entry[] {
    return this.entries
      .map((entry) => ({ entry, away: Math.hypot(placeOf(entry.source)[0] - x, placeOf(entry.source)[1] - y) }))
      .filter(({ away }) => away <= radiusM)
      .toSorted((a, b) => a.away - b.away || a.entry.id - b.entry.id)
      .map(({ entry }) => entry);
  }

  /**
   * Blocks within the survey's window of the places; `free` sources are left to the fit, other sources near them are taken
   * as known, and all the rest is subtracted.
   */
  window(places: ReadonlyArray<readonly [number, number]>, { noise, free, radiusM }: { readonly noise: NoiseModel; readonly free: readonly Entry[]; readonly radiusM: number }): Window {
    const { survey } = this;
    const near = new Set<Entry>();
    for (const [x, y] of places) for (const entry of this.near(x, y, radiusM + survey.windowM / 2)) near.add(entry);
    const fixed = [...near].filter((entry) => !free.includes(entry) && entry.source.kind !== 'line');
    const own = new Map<number, number>();
    for (const entry of [...free, ...fixed]) {
      for (let k = 0; k < entry.index.length; k++) own.set(entry.index[k]!, (own.get(entry.index[k]!) ?? 0) + entry.made[k]!);
    }
    return windowOf(survey, {
      places, radiusM, noise, fixed: fixed.map((entry) => entry.source),
      value: (i) => survey.blocks.value[i]! - this.made[i]! + (own.get(i) ?? 0),
    });
  }

  #make(entry: Entry): void {
    const { blocks, windowM, field } = this.survey;
    const [x, y] = placeOf(entry.source);
    const isLine = entry.source.kind === 'line';
    const from = (isLine ? LINE_FADE_FROM : FADE_FROM) * windowM;
    const to = (isLine ? LINE_FADE_TO : FADE_TO) * windowM;
    entry.index = blocksNear(this.survey, [[x, y]], to);
    entry.made = Float64Array.from(entry.index, (i) => {
      const away = Math.hypot(blocks.x[i]! - x, blocks.y[i]! - y);
      const fade = away <= from ? 1 : 0.5 + 0.5 * Math.cos((Math.PI * (away - from)) / (to - from));
      const s = 3 * i;
      return fade * anomalyAt([entry.source], field, [blocks.x[i]! + this.#shift[s]!, blocks.y[i]! + this.#shift[s + 1]!, blocks.heightM[i]! + this.#shift[s + 2]!]);
    });
    entry.index.forEach((i, k) => { this.made[i]! += entry.made[k]!; });
  }

  #unmake(entry: Entry): void {
    entry.index.forEach((i, k) => { this.made[i]! -= entry.made[k]!; });
  }
}
