import type { Engine, MarkingEngine, RunPoint } from '../../runtime/engine.js';
import { RunFault } from '../../runtime/engine.js';
import type { ModelLayout } from '../../runtime/layout.js';
import { rowStride } from '../../runtime/layout.js';
import { isSameState } from '../../runtime/samePoint.js';

/** Lets any engine notice when a state comes again, by running it cycle by cycle. */
export class SteppedEngine implements MarkingEngine {
  readonly canMark = true;
  repeatedAfter: number | undefined;
  readonly #engine: Engine;
  readonly #strides: readonly [input: number, output: number];
  #mark: RunPoint | undefined;
  #pace = 1;
  #sinceMark = 0;

  constructor(engine: Engine) {
    const { inputs, outputs, threeValued } = engine.layout;
    this.#engine = engine;
    this.#strides = [rowStride(inputs, threeValued), rowStride(outputs, threeValued)];
  }

  get layout(): ModelLayout {
    return this.#engine.layout;
  }

  mark(pace: number): void {
    this.#mark = this.#engine.save();
    this.#pace = pace;
    this.#sinceMark = 0;
    this.repeatedAfter = undefined;
  }

  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void {
    if (this.#mark === undefined || this.repeatedAfter !== undefined || cycles === 0) {
      this.#engine.run(cycles, stimulus, stimulusStride, response);
      return;
    }
    const [inputWords, outputWords] = this.#strides;
    for (let cycle = 0; cycle < cycles; cycle++) {
      const from = cycle * stimulusStride;
      const row = stimulus.subarray(from, from + inputWords);
      try {
        this.#engine.run(1, row, 0, response?.subarray(cycle * outputWords));
      } catch (error) {
        throw error instanceof RunFault ? new RunFault(cycle, error) : error;
      }
      this.#look();
    }
  }

  reset(state: Uint8Array): void {
    this.#engine.reset(state);
  }

  state(): Uint8Array {
    return this.#engine.state();
  }

  memoryState(): Uint8Array {
    return this.#engine.memoryState();
  }

  loadMemory(bytes: Uint8Array): void {
    this.#engine.loadMemory(bytes);
  }

  save(): RunPoint {
    return this.#engine.save();
  }

  restore(point: RunPoint): void {
    this.#engine.restore(point);
  }

  #look(): void {
    this.#sinceMark++;
    if (this.repeatedAfter !== undefined || this.#sinceMark % this.#pace !== 0) return;
    if (isSameState(this.#engine.save(), this.#mark!)) this.repeatedAfter = this.#sinceMark;
  }
}
