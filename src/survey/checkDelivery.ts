import { UserError } from '../errors.js';
import type { FileDigest, Host } from './host.js';
import type { Provenance } from './provenance.js';

/**
 * Holds a delivered folder against its provenance: every file there, of the size and hash that were delivered.
 * Throws on the first that is missing or changed. Returns what was checked, in words.
 */
export async function checkDelivery(bytes: Uint8Array, { where, host, resolve }: { where: string; host: Host; resolve(path: string): string }): Promise<string[]> {
  let provenance: Provenance;
  try {
    provenance = JSON.parse(new TextDecoder().decode(bytes)) as Provenance;
  } catch (error) {
    throw new UserError({ code: 'file_unreadable', where, found: (error as Error).message, wanted: 'the provenance that a run left' });
  }
  if (!Array.isArray(provenance.outputs)) throw new UserError({ code: 'file_unreadable', where, found: 'no list of outputs', wanted: 'the provenance that a run left' });
  for (const output of provenance.outputs) {
    const { bytes: size, sha256 } = await digestOf(resolve(output.path), host);
    if (sha256 !== output.sha256) {
      throw new UserError({
        code: 'value_invalid', where: output.path, found: `${size} bytes with SHA-256 ${sha256.slice(0, 12)}…`,
        wanted: `the ${output.bytes} bytes with SHA-256 ${output.sha256.slice(0, 12)}… that were delivered`, advice: 'the file was changed since; run again or restore it',
      });
    }
  }
  return [`${provenance.outputs.length} files are as they were delivered by ironplat ${provenance.ironplat}.`];
}

async function digestOf(path: string, host: Host): Promise<FileDigest> {
  if (host.files.digest) return host.files.digest(path);
  const content = await host.files.read(path);
  return { bytes: content.length, sha256: host.sha256(content) };
}
