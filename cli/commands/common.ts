import { relative, sep } from 'node:path';
import { Option } from 'commander';
import { UserError } from '../../src/errors.js';
import { VECTOR_FORMATS, type VectorFormat } from '../../src/survey/layerFiles.js';
import { jsonObject } from '../../src/survey/jsonObject.js';
import type { Host } from '../../src/survey/host.js';
import type { Terminal } from '../terminal.js';

/** Flags that every command which makes files has. */
export interface OutputFlags {
  readonly out: string;
  readonly formats?: string;
  readonly json?: boolean;
  readonly quiet?: boolean;
}

export const OUT = new Option('--out <folder>', 'folder to write into').makeOptionMandatory();
export const FORMATS = new Option('--formats <list>', `vector formats besides GeoJSON and FlatGeobuf: ${VECTOR_FORMATS.join(', ')}`);
export const JSON_FLAG = new Option('--json', 'one JSON document on stdout instead of sentences');
export const QUIET = new Option('--quiet', 'nothing on stdout and no progress; warnings and errors still go to stderr');

export function formatsOf(text: string | undefined): VectorFormat[] {
  const words = text === undefined ? [] : text.split(',').map((word) => word.trim()).filter(Boolean);
  for (const word of words) {
    if (!(VECTOR_FORMATS as readonly string[]).includes(word)) {
      throw new UserError({ code: 'usage', where: '--formats', found: `"${word}"`, wanted: `any of ${VECTOR_FORMATS.join(', ')}` });
    }
  }
  return words as VectorFormat[];
}

/** Progress on one line of a terminal that somebody watches; nothing elsewhere. */
export function progressOn(terminal: Terminal, quiet: boolean | undefined): { show(message: string): void; clear(): void } {
  if (!terminal.watched || quiet) return { show: () => undefined, clear: () => undefined };
  return { show: (message) => terminal.err(`\r\u001b[K${message} …`), clear: () => terminal.err('\r\u001b[K') };
}

/** A path as a person would write it from where they stand. */
export function shown(path: string, terminal: Terminal): string {
  const near = relative(terminal.cwd, path);
  return near === '' ? '.' : near;
}

/** Paths as they stand in what is delivered: seen from a folder, with forward slashes. */
export function seenFrom(folder: string): (path: string) => string {
  return (path) => relative(folder, path).split(sep).join('/');
}

/** The object in a JSON file; `what` is what it should be, for messages. */
export async function readJsonObject(host: Host, path: string, what: string): Promise<Record<string, unknown>> {
  return jsonObject(new TextDecoder().decode(await host.files.read(path)), path, what);
}
