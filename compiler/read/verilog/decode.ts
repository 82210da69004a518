// A byte order mark in the midst of a text is a character like any other.
const decoder = new TextDecoder('utf-8', { ignoreBOM: true });

/** The text between two offsets, taken as UTF-8. */
export function decode(bytes: Uint8Array, start: number, end: number): string {
  return decoder.decode(bytes.subarray(start, end));
}
