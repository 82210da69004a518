/** Adds custom sections (WebAssembly Core Specification, 5.5.3) at the end of a module. */
export function withSections(
  module: Uint8Array,
  sections: readonly (readonly [name: string, content: Uint8Array])[],
): Uint8Array<ArrayBuffer> {
  const parts = [module];
  for (const [name, content] of sections) {
    const title = new TextEncoder().encode(name);
    const head = Uint8Array.from([...varint(title.length), ...title]);
    const size = varint(head.length + content.length);
    parts.push(Uint8Array.from([CUSTOM, ...size]), head, content);
  }
  return new Uint8Array(Buffer.concat(parts));
}

const CUSTOM = 0;

/** An unsigned number in LEB128. */
function varint(value: number): number[] {
  const bytes: number[] = [];
  let rest = value;
  do {
    const low = rest & 0x7f;
    rest >>>= 7;
    bytes.push(rest === 0 ? low : low | 0x80);
  } while (rest !== 0);
  return bytes;
}
