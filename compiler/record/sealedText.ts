import { createHash } from 'node:crypto';

/** Thrown for a file of a record that is not as it was written, or is none. */
export class DamagedFile extends Error {
  constructor(name: string, what: string) {
    super(`${name}: ${what}`);
    this.name = 'DamagedFile';
  }
}

const OPENING = '{\n  "sha256": "';
const CLOSING = '",\n';
const DIGITS = 64;

/** SHA-256 of bytes, as hexadecimal digits. */
export const sha256 = (bytes: Uint8Array | string): string =>
  createHash('sha256').update(bytes).digest('hex');

/**
 * An object as JSON whose first member, `sha256`, is the hash of the text behind that line, so that
 * every change of a byte shows.
 */
export function sealed(content: object): Uint8Array {
  const text = `${JSON.stringify(content, null, 2).slice(2)}\n`;
  return new TextEncoder().encode(`${OPENING}${sha256(text)}${CLOSING}${text}`);
}

/** The object in sealed bytes. Throws `DamagedFile`. */
export function unsealed(name: string, bytes: Uint8Array): unknown {
  const seal = OPENING.length + DIGITS;
  const start = seal + CLOSING.length;
  // Hashed as bytes: those that are no UTF-8 would all become the same character.
  const expected = `${OPENING}${sha256(bytes.subarray(start))}${CLOSING}`;
  if (bytes.length <= start) throw new DamagedFile(name, 'it is not whole');
  if (Buffer.from(bytes.subarray(0, start)).toString('latin1') !== expected) {
    throw new DamagedFile(name, 'it is not as it was written');
  }
  return JSON.parse(`{${new TextDecoder().decode(bytes.subarray(start))}`);
}
