import { UserError } from '../errors.js';
import type { ByteSource } from './byteStores.js';

/** As much of `fetch` as is used. */
export type FetchRange = (address: string, request: { headers: Record<string, string> }) => Promise<{
  readonly status: number;
  readonly headers: { get(name: string): string | null };
  arrayBuffer(): Promise<ArrayBuffer>;
}>;

/** The first request takes this much: the directories of most files, so that opening costs one request. */
const FIRST_BYTES = 1 << 15;
const PARTIAL = 206;

/**
 * A file behind an address as a source of parts, by HTTP range requests (RFC 9110, section 14) to any server that
 * answers them; none has to know what the file is. Throws UserError `file_unreadable` where the server does not answer
 * so, or where the file changes while it is being read.
 */
export async function httpSource(address: string, fetch: FetchRange): Promise<ByteSource> {
  const first = await request(address, { fetch, offset: 0, length: FIRST_BYTES });
  const { size, mark } = first;
  return {
    size,
    async read(offset, length) {
      const end = Math.min(size, offset + length);
      if (end <= offset) return new Uint8Array(0);
      if (end <= first.bytes.length) return first.bytes.subarray(offset, end);
      const answer = await request(address, { fetch, offset, length: end - offset });
      if (answer.size !== size || answer.mark !== mark) throw unreadable(address, 'a file that changed while it was being read', 'try again');
      if (answer.bytes.length !== end - offset) throw unreadable(address, `${answer.bytes.length} bytes for a range of ${end - offset}`);
      return answer.bytes;
    },
  };
}

interface Answer {
  readonly bytes: Uint8Array;
  /** Of the whole file. */
  readonly size: number;
  /** What changes when the file does; null where the server says nothing. */
  readonly mark: string | null;
}

async function request(address: string, { fetch, offset, length }: { fetch: FetchRange; offset: number; length: number }): Promise<Answer> {
  let answer: Awaited<ReturnType<FetchRange>>;
  try {
    answer = await fetch(address, { headers: { range: `bytes=${offset}-${offset + length - 1}` } });
  } catch (problem) {
    throw unreadable(address, `no answer (${problem instanceof Error ? problem.message : String(problem)})`);
  }
  if (answer.status !== PARTIAL) {
    throw unreadable(address, `status ${answer.status} in answer to a range`, answer.status === 200 ? 'the server sends whole files only: download the file and read it from there' : undefined);
  }
  const range = /^bytes (\d+)-(\d+)\/(\d+)$/.exec(answer.headers.get('content-range') ?? '');
  if (!range || Number(range[1]) !== offset) throw unreadable(address, `the range ${JSON.stringify(answer.headers.get('content-range'))} in answer to one from byte ${offset}`);
  return { bytes: new Uint8Array(await answer.arrayBuffer()), size: Number(range[3]), mark: answer.headers.get('etag') ?? answer.headers.get('last-modified') };
}

function unreadable(address: string, found: string, advice?: string): UserError {
  return new UserError({ code: 'file_unreadable', where: address, found, wanted: 'a server that answers range requests with status 206', ...(advice ? { advice } : {}) });
}
