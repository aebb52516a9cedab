/** Where an entry of a classic little-endian TIFF lies: the entry itself and its values. */
export interface Entry {
  readonly entryAt: number;
  readonly valuesAt: number;
  readonly count: number;
}

const TYPE_BYTES: Readonly<Record<number, number>> = { 2: 1, 3: 2, 4: 4, 12: 8 };

export function directoryAt(view: DataView, number: number): number {
  let at = view.getUint32(4, true);
  for (let i = 0; i < number; i += 1) at = view.getUint32(nextPointerAt(view, at), true);
  return at;
}

export function nextPointerAt(view: DataView, directory: number): number {
  return directory + 2 + 12 * view.getUint16(directory, true);
}

export function entryOf(view: DataView, number: number, tag: number): Entry {
  const directory = directoryAt(view, number);
  for (let at = directory + 2; at < nextPointerAt(view, directory); at += 12) {
    if (view.getUint16(at, true) !== tag) continue;
    const count = view.getUint32(at + 4, true);
    const bytes = count * TYPE_BYTES[view.getUint16(at + 2, true)]!;
    return { entryAt: at, valuesAt: bytes <= 4 ? at + 8 : view.getUint32(at + 8, true), count };
  }
  throw new Error(`No tag ${tag} in directory ${number}`);
}

/** A copy of the file with a change made to it. */
export function tampered(bytes: Uint8Array, change: (view: DataView) => void): Uint8Array {
  const copy = bytes.slice();
  change(new DataView(copy.buffer));
  return copy;
}
