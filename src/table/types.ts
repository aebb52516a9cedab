/** Columns of text as they stand in a file, all of the same length. Row 1 is the first row after the header. */
export interface TextTable {
  /** The file's name, for messages. */
  readonly source: string;
  readonly names: readonly string[];
  readonly rows: number;
  /** Line of the file on which each row starts is row + `headerLines`; messages name the row. */
  readonly columns: ReadonlyMap<string, readonly string[]>;
}
