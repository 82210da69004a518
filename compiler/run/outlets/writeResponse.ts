import {
  ReaderGone,
  ResponseWriter,
  type ResponseWriterOptions,
} from '../../../runtime/node/index.js';
import type { Findings, Outlet, OutletBlock, OutletPlan } from './outlet.js';

/**
 * Writes the response to a file, which appears when the run is over, or to a pipe. A pipe that is
 * not read to its end is no failure: the run goes on if it has another purpose.
 */
export function writeResponse(path: string, options: ResponseWriterOptions = {}): OutletPlan {
  return {
    open: ({ design }) => new WrittenResponse(new ResponseWriter(path, design.layout, options)),
  };
}

class WrittenResponse implements Outlet {
  interest: 'lost' | undefined;
  readonly #writer: ResponseWriter;

  constructor(writer: ResponseWriter) {
    this.#writer = writer;
  }

  get wantsResponse(): boolean {
    return this.interest === undefined;
  }

  async take(block: OutletBlock): Promise<undefined> {
    await this.#whileRead(() => this.#writer.write(block));
  }

  async finish(): Promise<Findings> {
    await this.#whileRead(() => this.#writer.finish());
    return {};
  }

  keep(): void {
    this.#writer.keep();
  }

  discard(): void {
    this.#writer.discard();
  }

  async #whileRead(write: () => Promise<void>): Promise<void> {
    if (this.interest === 'lost') return;
    try {
      await write();
    } catch (error) {
      if (!(error instanceof ReaderGone)) throw error;
      this.interest = 'lost';
    }
  }
}
