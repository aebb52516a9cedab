/** Where bytes come from. The caller owns files, sockets and caches; a path means what the caller says it means. */
export interface FileSource {
  /** Throws UserError `file_missing` where there is no such file. */
  read(path: string): Promise<Uint8Array>;
  has(path: string): Promise<boolean>;
}

/** Last part of a path, as it is named in messages. */
export function baseName(path: string): string {
  return path.slice(Math.max(path.lastIndexOf('/'), path.lastIndexOf('\\')) + 1);
}

/** Lower-case extension without its dot; empty where there is none. */
export function extension(path: string): string {
  const name = baseName(path);
  const dot = name.lastIndexOf('.');
  return dot > 0 ? name.slice(dot + 1).toLowerCase() : '';
}
