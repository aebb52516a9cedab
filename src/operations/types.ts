import type { FileSource } from '../files.js';
import type { SolveTile } from '../grid/solveTile.js';
import type { GridRemarks } from '../grid/types.js';
import type { Grid, RowSource } from '../raster/types.js';
import type { QuantityUnit } from '../units.js';
import type { Site } from '../site/types.js';

/**
 * The part of JSON Schema 2020-12 that parameters are written in. `x-unit` marks a quantity: the number stands in that
 * unit, a string names its own. `x-path` marks a file, relative to the survey file; `run` receives it resolved.
 */
export interface Schema {
  readonly type?: 'object' | 'array' | 'string' | 'number' | 'integer' | 'boolean';
  readonly title?: string;
  readonly description?: string;
  readonly default?: unknown;
  readonly enum?: readonly unknown[];
  readonly examples?: readonly unknown[];
  readonly minimum?: number;
  readonly maximum?: number;
  readonly exclusiveMinimum?: number;
  readonly exclusiveMaximum?: number;
  readonly minLength?: number;
  readonly pattern?: string;
  readonly items?: Schema;
  readonly minItems?: number;
  readonly maxItems?: number;
  readonly properties?: Readonly<Record<string, Schema>>;
  readonly required?: readonly string[];
  readonly additionalProperties?: boolean | Schema;
  readonly 'x-unit'?: QuantityUnit;
  readonly 'x-path'?: true;
}

export interface ObjectSchema extends Schema {
  readonly type: 'object';
  readonly properties: Readonly<Record<string, Schema>>;
}

/** A thing that one operation hands to the next, by its role: `records`, `plan`, `readings`, `residual`, … */
export interface Slot {
  readonly title: string;
  /**
   * Type of the value: a stage's record type, a Grid, a Layer, an HTML text, or any JSON value. An output of form `grid`
   * may also be made as it is read (GridOutput), so that it can be larger than memory: it is written, and no later
   * operation can have it as an input.
   */
  readonly form: 'records' | 'plan' | 'readings' | 'grid' | 'layer' | 'anomalies' | 'findings' | 'html' | 'json';
  /** An input that the operation can do without; an output that it makes only when asked. */
  readonly optional?: boolean;
  /** Unit of a grid's values, for the raster's metadata. */
  readonly unit?: string;
}

/** What an operation may return for an output of form `grid`; its own unit, where it has one, is taken before the slot's. */
export type GridOutput = (Grid | StreamedGrid) & { readonly unit?: string };

/** A grid that is made as its rows are read, which happens once. */
export interface StreamedGrid extends RowSource {
  /** Asked for once all rows were read: notes for the terminal, warnings for the user. */
  remarks?(): GridRemarks;
}

export interface Task {
  readonly site: Site;
  /** Validated against the operation's schema: defaults filled in, quantities in their unit, paths resolved. */
  readonly parameters: Readonly<Record<string, unknown>>;
  /** Inputs by role; an optional one may be absent. */
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly files: FileSource;
  /** Anything random starts from here. */
  readonly seed: number;
  /** Solves a tile of a large grid on a thread of its own, where the surroundings have threads. Results do not depend on it. */
  readonly solveTile?: SolveTile;
  /** What the run warned of, and which operations it ran, before this one; absent where an operation stands alone. */
  readonly before?: {
    readonly warnings: readonly string[];
    readonly operations: ReadonlyArray<Pick<Operation, 'id' | 'version' | 'sources'>>;
  };
  /** What goes on, for a terminal; never a result. */
  progress(message: string): void;
  /** What the user has to know; goes into the report, the provenance and to stderr. */
  warn(message: string): void;
}

/** One operation, described so that command line, help, survey-file schema and process description all come from it. */
export interface Operation {
  /** One lower-case word: the command, and the key of its section in the survey file. */
  readonly id: string;
  /** Semantic version of what it computes. */
  readonly version: string;
  readonly title: string;
  /** One or two sentences. */
  readonly summary: string;
  /** Parameters, keys in snake_case. */
  readonly parameters: ObjectSchema;
  readonly inputs: Readonly<Record<string, Slot>>;
  readonly outputs: Readonly<Record<string, Slot>>;
  /** Published methods it rests on. */
  readonly sources: readonly string[];
  /** A command line that shows its use. */
  readonly example: string;
  /** Returns its outputs by role. */
  run(task: Task): Promise<Readonly<Record<string, unknown>>>;
}
