const decoder = new TextDecoder();

/** The text between two offsets, taken as UTF-8. */
export function decode(bytes: Uint8Array, start: number, end: number): string {
  return decoder.decode(bytes.subarray(start, end));
}
