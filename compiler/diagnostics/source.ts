/** A text that was read, and where it came from. Offsets into it count bytes. */
export class Source {
  /** The name to print: a path as the user gave it. */
  readonly path: string;
  readonly bytes: Uint8Array;
  #lineStarts: Uint32Array | undefined;

  /** `text` may be a string (taken as UTF-8) or the bytes of a file. */
  constructor(path: string, text: string | Uint8Array) {
    this.path = path;
    this.bytes = typeof text === 'string' ? new TextEncoder().encode(text) : text;
  }

  /** Line and column, both from 1, of a byte offset. Columns count characters, not bytes. */
  place(offset: number): { line: number; column: number } {
    const starts = this.#starts();
    let low = 0;
    let high = starts.length - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (starts[middle]! <= offset) low = middle;
      else high = middle - 1;
    }
    const column = this.slice(starts[low]!, offset).length + 1;
    return { line: low + 1, column };
  }

  /** The text between two byte offsets. */
  slice(start: number, end: number): string {
    return new TextDecoder().decode(this.bytes.subarray(start, end));
  }

  /** The whole line around a byte offset, without its line end. */
  lineAt(offset: number): string {
    const starts = this.#starts();
    const { line } = this.place(offset);
    const end = line < starts.length ? starts[line]! - 1 : this.bytes.length;
    return this.slice(starts[line - 1]!, end).replace(/\r$/, '');
  }

  // Built on the first message only: a netlist without problems never pays for it.
  #starts(): Uint32Array {
    if (this.#lineStarts === undefined) {
      const starts = [0];
      for (let i = 0; i < this.bytes.length; i++) if (this.bytes[i] === 10) starts.push(i + 1);
      this.#lineStarts = Uint32Array.from(starts);
    }
    return this.#lineStarts;
  }
}

/** A stretch of a source, in byte offsets, end exclusive. */
export interface Span {
  readonly source: Source;
  readonly start: number;
  readonly end: number;
}
