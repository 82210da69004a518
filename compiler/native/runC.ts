import { readFile, writeFile } from 'node:fs/promises';
import { Scratch } from './scratch.js';

/** The rows that a native program is run on. */
export interface NativeRows {
  /** Packed rows, one after another. */
  readonly stimulus: Uint32Array;
  readonly count: number;
}

/** A design's C, compiled; each call runs it as a process of its own from the power-up state. */
export class NativeProgram {
  /** Milliseconds that the C compiler took. */
  readonly compileMs: number;
  readonly #scratch: Scratch;
  readonly #rows: number;

  private constructor(scratch: Scratch, rows: number, compileMs: number) {
    this.#scratch = scratch;
    this.#rows = rows;
    this.compileMs = compileMs;
  }

  /**
   * Compiles the text of `emitC` with a command of `findCompiler`, at optimization level 2 and with
   * `flags`. Throws an Error with the compiler's words if that fails. The program must be closed.
   */
  static async build(
    text: string,
    command: readonly string[],
    rows: NativeRows,
    flags: readonly string[] = [],
  ): Promise<NativeProgram> {
    const scratch = new Scratch();
    try {
      await writeFile(scratch.file('cycle.c'), text);
      await writeFile(scratch.file('stimulus'), rows.stimulus);
      const start = performance.now();
      const files = ['-o', scratch.file('cycle'), scratch.file('cycle.c')];
      await scratch.run([...command, '-O2', ...flags, ...files]);
      return new NativeProgram(scratch, rows.count, performance.now() - start);
    } catch (error) {
      scratch.close();
      throw error;
    }
  }

  /** The packed response to all rows, run once. */
  async respond(): Promise<Uint32Array> {
    const file = this.#scratch.file('response');
    await this.#call('respond', file);
    const bytes = await readFile(file);
    return new Uint32Array(Uint8Array.from(bytes).buffer);
  }

  /** Nanoseconds that a number of cycles takes, the rows being repeated. */
  async time(cycles: number): Promise<number> {
    return Number(await this.#call('time', String(cycles)));
  }

  /** Removes all that was made. */
  close(): void {
    this.#scratch.close();
  }

  #call(verb: string, last: string): Promise<string> {
    const [program, stimulus] = [this.#scratch.file('cycle'), this.#scratch.file('stimulus')];
    return this.#scratch.run([program, verb, stimulus, String(this.#rows), last]);
  }
}
