/** Where a command speaks to and what it sees of its surroundings; tests bring their own. */
export interface Terminal {
  readonly cwd: string;
  readonly env: Readonly<Record<string, string | undefined>>;
  /** Results. */
  out(text: string): void;
  /** Progress and problems. */
  err(text: string): void;
  /** Progress is shown only where somebody watches. */
  readonly watched: boolean;
}

export function nodeTerminal(): Terminal {
  return {
    cwd: process.cwd(),
    env: process.env,
    out: (text) => void process.stdout.write(text),
    err: (text) => void process.stderr.write(text),
    watched: process.stderr.isTTY === true,
  };
}
