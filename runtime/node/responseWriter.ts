import type { ModelLayout } from '../layout.js';
import type { ResponseBlock } from '../stream.js';
import type { ByteSink } from './bytes/byteSink.js';
import { openSink } from './bytes/openSink.js';
import { formOf, type ValueForm } from './fileForm.js';
import { PackedResponse } from './packed/packedResponse.js';
import type { ResponseChoice } from './responseChoice.js';
import { ResponseTable } from './responseTable.js';

/** How a response is written. */
export interface ResponseWriterOptions extends ResponseChoice {
  /** `csv` or `packed`; by the ending of the file unless given. */
  readonly form?: ValueForm;
}

/**
 * Writes a response to a file that appears all at once: a run that fails leaves it as it was.
 *
 * The file is a table, or packed rows where its ending is `.rows`, and compressed where that is
 * followed by `.gz`. Standard output (`-`) and pipes are written at the pace of who reads them.
 * Call `keep` or `discard` at the end. All methods throw what the file system throws, and
 * `ReaderGone` where a pipe is not read any more.
 */
export class ResponseWriter {
  readonly #form: ResponseTable | PackedResponse;
  readonly #sink: ByteSink;

  #isStarted = false;

  /**
   * Opens a file. Throws RangeError for a form that is only read, and for a bad choice of ports.
   */
  constructor(path: string, layout: ModelLayout, options: ResponseWriterOptions = {}) {
    const form = options.form ?? formOf(path);
    if (form !== 'csv' && form !== 'packed') {
      throw new RangeError(`a response is csv or packed, not ${form}`);
    }
    const Form = form === 'csv' ? ResponseTable : PackedResponse;
    this.#form = new Form(layout, options);
    this.#sink = openSink(path);
  }

  /** Adds the rows of a block. */
  async write(block: ResponseBlock): Promise<void> {
    await this.#start();
    for (const piece of this.#form.rows(block)) {
      const written = this.#sink.write(piece);
      if (written !== undefined) await written;
    }
  }

  /** Waits until all is written. */
  async finish(): Promise<void> {
    await this.#start();
    await this.#sink.finish();
  }

  /** Gives the file its name. */
  keep(): void {
    this.#sink.keep();
  }

  /** Gives up: nothing is left of what was written. Does nothing after `keep`. */
  discard(): void {
    this.#sink.discard();
  }

  // Not before there is a row: a run that cannot start leaves a pipe empty.
  async #start(): Promise<void> {
    if (this.#isStarted) return;
    this.#isStarted = true;
    await this.#sink.write(this.#form.header());
  }
}
