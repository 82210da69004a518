import { type ModelLayout, type PortLayout, rowStride } from '../../layout.js';
import { RowGatherer } from '../../rowGatherer.js';
import type { ResponseBlock, StimulusBlock } from '../../stream.js';
import type { StimulusSource } from '../stimulusSource.js';
import { UserModule } from './loadModule.js';
import { type GivenValue, PortWriter, portValues, type SeenValue } from './portValues.js';

/** What the default export of a stimulus module is called with. */
export interface StimulusRun {
  /** The input ports without the clocks, which tick by themselves. */
  readonly inputs: readonly PortLayout[];
  readonly outputs: readonly PortLayout[];
  /** Whether values may be x. */
  readonly threeValued: boolean;
  /** 32-bit words of a packed row of inputs; see `RowLayout`. */
  readonly rowWords: number;
  /**
   * The outputs in the last cycle, by name; undefined before the first. Throws Error unless the
   * module has `export const reacts = true`, without which rows are gathered before they are run.
   */
  response(): Record<string, SeenValue> | undefined;
}

/**
 * What a stimulus module yields: the values of some ports (`port`, `port[3]`, `port[7:4]`) for one
 * cycle, or for as many as `@cycles` says, while all others hold theirs; packed rows, `rowWords`
 * words a cycle, for speed; or nothing, for a cycle with the inputs as they are.
 */
export type StimulusStep = Readonly<Record<string, GivenValue>> | Uint32Array | undefined;

/**
 * The default export of a stimulus module: a generator function, mostly. Where the module has
 * `export const reacts = true`, each step is run before the next one is asked for, and `yield`
 * gives the outputs of its last cycle.
 */
export type StimulusProgram = (
  run: StimulusRun,
) => Iterable<StimulusStep> | AsyncIterable<StimulusStep>;

const DURATION = '@cycles';

/**
 * A stimulus that a JavaScript module makes; see `StimulusProgram`. Throws `FileError` with the
 * place where the module throws or gives what is no stimulus.
 */
export async function moduleStimulus(path: string, layout: ModelLayout): Promise<StimulusSource> {
  const module = await UserModule.load(path);
  return new ModuleStimulus(module, layout);
}

class ModuleStimulus implements StimulusSource {
  readonly #module: UserModule;
  readonly #layout: ModelLayout;
  readonly #writer: PortWriter;
  readonly #gatherer: RowGatherer;
  readonly #stride: number;
  readonly #reacts: boolean;
  readonly #lastRow: Uint32Array;
  #cycle = 0;
  #hasResponse = false;

  constructor(module: UserModule, layout: ModelLayout) {
    this.#module = module;
    this.#layout = layout;
    this.#writer = new PortWriter(layout.inputs, layout.threeValued);
    this.#stride = rowStride(layout.inputs, layout.threeValued);
    this.#gatherer = new RowGatherer(this.#stride);
    this.#reacts = module.exports.reacts === true;
    this.#lastRow = new Uint32Array(rowStride(layout.outputs, layout.threeValued));
  }

  /** Only where the module wants it, since it costs the time of looking. */
  get see(): ((block: ResponseBlock) => void) | undefined {
    return this.#reacts ? (block) => this.#keepLast(block) : undefined;
  }

  notes(): readonly string[] {
    return [];
  }

  async *blocks(): AsyncGenerator<StimulusBlock, void, undefined> {
    const steps = this.#start();
    try {
      for (;;) {
        // Awaiting what is there already would cost more than most steps do.
        const next = this.#ask(() => steps.next(this.#reacts ? this.#response() : undefined));
        const { done, value } = next instanceof Promise ? await this.#answer(next) : next;
        if (done) break;
        if (value instanceof Uint32Array) yield* this.#packed(value);
        else if (this.#gatherer.add(this.#row(value))) yield* this.#gatherer.take();
        if (this.#reacts) yield* this.#gatherer.take();
      }
      yield* this.#gatherer.take();
    } finally {
      await steps.return?.();
    }
  }

  #start(): Iterator<unknown> | AsyncIterator<unknown> {
    const { inputs, outputs, threeValued } = this.#layout;
    const run: StimulusRun = {
      ...{ inputs: inputs.ports, outputs: outputs.ports, threeValued, rowWords: this.#stride },
      response: () => this.#response(),
    };
    const main = this.#module.main();
    const made = this.#ask(() => main(run)) as Partial<Iterable<unknown> & AsyncIterable<unknown>>;
    const steps = made?.[Symbol.asyncIterator]?.() ?? made?.[Symbol.iterator]?.();
    if (steps) return steps;
    throw this.#module.refusal('the default export must be a generator function');
  }

  *#packed(rows: Uint32Array): Generator<StimulusBlock> {
    yield* this.#gatherer.take();
    const stride = this.#stride;
    if (stride === 0 || rows.length % stride !== 0) {
      throw this.#refusal(`rows have ${stride} words each, got ${rows.length} words`);
    }
    if (rows.length === 0) return;
    const cycles = rows.length / stride;
    this.#gatherer.row.set(rows.subarray(rows.length - stride));
    this.#cycle += cycles;
    yield { cycles, rows, stride };
  }

  /** Changes the present row; returns for how many cycles it lasts. */
  #row(step: unknown): number {
    let cycles = 1;
    if (step !== undefined && (typeof step !== 'object' || step === null)) {
      throw this.#refusal(`expected an object with values of ports, got ${String(step)}`);
    }
    for (const name in step) {
      const value = (step as Record<string, unknown>)[name];
      if (value === undefined) continue;
      if (name === DURATION) cycles = this.#duration(value);
      else {
        const refusal = this.#writer.set(this.#gatherer.row, name, value);
        if (refusal) throw this.#refusal(this.#clockRefusal(name) ?? refusal);
      }
    }
    this.#cycle += cycles;
    return cycles;
  }

  #duration(value: unknown): number {
    if (Number.isSafeInteger(value) && (value as number) > 0) return value as number;
    throw this.#refusal(`${DURATION} is ${String(value)}: a row lasts at least 1 cycle`);
  }

  #clockRefusal(name: string): string | undefined {
    if (!this.#layout.clocks.includes(name)) return undefined;
    return `${name} is a clock: it ticks by itself; leave it out`;
  }

  #refusal(reason: string): Error {
    return this.#module.refusal(`cycle ${this.#cycle}: ${reason}`);
  }

  #keepLast({ rows, cycles }: ResponseBlock): void {
    const start = (cycles - 1) * this.#lastRow.length;
    for (let i = 0; i < this.#lastRow.length; i++) this.#lastRow[i] = rows[start + i]!;
    this.#hasResponse = true;
  }

  #response(): Record<string, SeenValue> | undefined {
    if (!this.#reacts) {
      throw new Error('to see responses, the module needs: export const reacts = true');
    }
    if (!this.#hasResponse) return undefined;
    return portValues(this.#layout.outputs, this.#layout, this.#lastRow, 0);
  }

  #ask<T>(call: () => T): T {
    try {
      return call();
    } catch (error) {
      throw this.#module.error(error, `cycle ${this.#cycle}`);
    }
  }

  async #answer<T>(next: Promise<T>): Promise<T> {
    try {
      return await next;
    } catch (error) {
      throw this.#module.error(error, `cycle ${this.#cycle}`);
    }
  }
}
