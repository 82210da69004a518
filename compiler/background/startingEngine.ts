import type { Engine, RunPoint } from '../../runtime/engine.js';
import type { ModelLayout } from '../../runtime/layout.js';

/** Milliseconds that one call should take while the first engine runs. */
const PIECE_MS = 10;

/**
 * Runs on an engine that is there at once until a faster one of the same circuit is ready, which
 * then goes on from where it stands. Both give the same responses, so nobody sees when it changes.
 *
 * The change happens between two calls of `run`, and only if the caller lets events be handled:
 * call it with few cycles at a time, see `pieceCycles`. Where the faster engine cannot be made, the
 * next call throws what it failed with.
 */
export class StartingEngine implements Engine {
  readonly layout: ModelLayout;
  #engine: Engine;
  #next: Engine | undefined;
  #failure: { readonly error: unknown } | undefined;
  #pieceCycles = 1;

  constructor(first: Engine, faster: Promise<Engine>) {
    this.layout = first.layout;
    this.#engine = first;
    faster.then(
      (engine) => {
        this.#next = engine;
      },
      (error: unknown) => {
        this.#failure = { error };
      },
    );
  }

  /** Cycles that the next call of `run` should have at most. */
  get pieceCycles(): number {
    this.#changeOver();
    return this.#pieceCycles;
  }

  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void {
    this.#changeOver();
    const started = performance.now();
    this.#engine.run(cycles, stimulus, stimulusStride, response);
    if (this.#pieceCycles === Number.POSITIVE_INFINITY || cycles < this.#pieceCycles) return;
    const ms = performance.now() - started;
    if (ms < PIECE_MS / 2) this.#pieceCycles *= 2;
    else if (ms > PIECE_MS * 2 && this.#pieceCycles > 1) this.#pieceCycles /= 2;
  }

  reset(state: Uint8Array): void {
    this.#changeOver();
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

  #changeOver(): void {
    if (this.#failure !== undefined) throw this.#failure.error;
    if (this.#next === undefined) return;
    this.#next.restore(this.#engine.save());
    this.#engine = this.#next;
    this.#next = undefined;
    this.#pieceCycles = Number.POSITIVE_INFINITY;
  }
}
