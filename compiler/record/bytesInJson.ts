/*
 * What outlets save is JSON, in which bytes and words may stand: they become objects of one member
 * with the bytes in base 64 (RFC 4648), words as hexadecimal digits of eight each.
 */
const BYTES = '@bytes';
const WORDS = '@words';

/** A value of which JSON can be made. */
export function toJson(value: unknown): unknown {
  if (value instanceof Uint8Array) return { [BYTES]: Buffer.from(value).toString('base64') };
  if (value instanceof Uint32Array) {
    const digits = Array.from(value, (word) => word.toString(16).padStart(8, '0'));
    return { [WORDS]: digits.join('') };
  }
  if (Array.isArray(value)) return value.map(toJson);
  if (value === null || typeof value !== 'object') return value ?? null;
  return Object.fromEntries(Object.entries(value).map(([key, entry]) => [key, toJson(entry)]));
}

/** What `toJson` was given, but for `undefined`, which has become null. */
export function fromJson(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(fromJson);
  if (value === null || typeof value !== 'object') return value;
  const { [BYTES]: bytes, [WORDS]: words } = value as Record<string, unknown>;
  if (typeof bytes === 'string') return Uint8Array.from(Buffer.from(bytes, 'base64'));
  if (typeof words === 'string') {
    const digits = words.match(/.{8}/g) ?? [];
    return Uint32Array.from(digits, (word) => Number.parseInt(word, 16));
  }
  return Object.fromEntries(Object.entries(value).map(([key, entry]) => [key, fromJson(entry)]));
}
