/** Columns of text as they stand in a file, all of the same length. Row 1 is the first row after the header. */
export interface TextTable {
  /** The file's name, for messages. */
  readonly source: string;
  readonly names: readonly string[];
  readonly rows: number;
  /** Texts by column name; messages name the row, counted from 1 after the header. */
  readonly columns: ReadonlyMap<string, readonly string[]>;
  /** What the user has to know about how the file was read: an encoding that was taken, blank lines left out. */
  readonly notes?: readonly string[];
}
