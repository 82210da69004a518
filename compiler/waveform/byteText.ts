const PIECE = 1 << 16;

/** Text in ASCII that is made piece by piece; other characters are written as UTF-8. */
export class ByteText {
  #bytes = new Uint8Array(2 * PIECE);
  #end = 0;

  /** Whether enough has been gathered for a piece; `take` it then. */
  get isPiece(): boolean {
    return this.#end >= PIECE;
  }

  /** What has been gathered; good until the next byte is put. */
  take(): Uint8Array {
    const piece = this.#bytes.subarray(0, this.#end);
    this.#end = 0;
    return piece;
  }

  /** Adds a byte. */
  byte(value: number): void {
    if (this.#end === this.#bytes.length) this.#room(1);
    this.#bytes[this.#end++] = value;
  }

  /** Adds a text. */
  text(text: string): void {
    this.#room(3 * text.length);
    const { written } = new TextEncoder().encodeInto(text, this.#bytes.subarray(this.#end));
    this.#end += written;
  }

  /** Lets `write` add up to `most` bytes: it is given the array and a place, and returns the end. */
  with(most: number, write: (bytes: Uint8Array, at: number) => number): void {
    this.#room(most);
    this.#end = write(this.#bytes, this.#end);
  }

  #room(count: number): void {
    if (this.#end + count <= this.#bytes.length) return;
    const larger = new Uint8Array(Math.max(2 * this.#bytes.length, this.#end + count));
    larger.set(this.#bytes);
    this.#bytes = larger;
  }
}
