import { RunFault } from '../../engine.js';
import type { PortLayout } from '../../layout.js';
import type { BlockRequest, BlockResult } from '../block.js';
import type { ChangeListener } from '../changes.js';
import type { OutputValues, Reached } from '../condition.js';
import type { KeptMemory, KeptNet } from '../description.js';
import type { SavedState } from '../savedState.js';
import type { Value } from '../values.js';
import { CANCELLED, type ErrorText, type Loaded, type Method, type Reply } from './protocol.js';
import type { Thread } from './thread.js';

/** How a long call is followed and ended. */
export interface CallOptions {
  /** Told some twenty times a second how many cycles have passed. */
  readonly onProgress?: (done: number) => void;
  /** Ends the call: its promise rejects with the reason, the model stays where it got to. */
  readonly signal?: AbortSignal;
}

interface Call extends CallOptions {
  readonly resolve: (result: unknown) => void;
  readonly reject: (error: unknown) => void;
}

/** A model in a worker: what `Model` does, with a promise for each answer. */
export class WorkerModel {
  /** Cycles since power-up, as of the last answer. */
  cycle = 0;
  readonly #thread: Thread;
  readonly #calls = new Map<number, Call>();
  readonly #listeners = new Map<number, ChangeListener>();
  #about: Loaded | undefined;
  #next = 0;
  #end: Error | undefined;

  private constructor(thread: Thread) {
    this.#thread = thread;
    thread.listen(
      (message) => this.#receive(message as Reply),
      (error) => this.#close(error),
    );
  }

  /** Loads a model in a worker that has been started. */
  static async load(thread: Thread, source: unknown, options: object): Promise<WorkerModel> {
    const model = new WorkerModel(thread);
    try {
      model.#about = (await model.#call('load', [source, options])) as Loaded;
      return model;
    } catch (error) {
      model.dispose();
      throw error;
    }
  }

  get name(): string {
    return this.#about!.name;
  }

  get clocks(): readonly string[] {
    return this.#about!.clocks;
  }

  get inputs(): readonly PortLayout[] {
    return this.#about!.inputs;
  }

  get outputs(): readonly PortLayout[] {
    return this.#about!.outputs;
  }

  get nets(): readonly KeptNet[] {
    return this.#about!.nets;
  }

  get memories(): readonly KeptMemory[] {
    return this.#about!.memories;
  }

  get inputWords(): number {
    return this.#about!.inputWords;
  }

  get outputWords(): number {
    return this.#about!.outputWords;
  }

  async write(values: Readonly<Record<string, Value>>): Promise<void> {
    await this.#call('write', [values]);
  }

  async read(...name: [] | [string]): Promise<Value | Record<string, Value>> {
    return (await this.#call('read', name)) as Value | Record<string, Value>;
  }

  async step(cycles = 1, options?: CallOptions): Promise<void> {
    await this.#call('step', [cycles], options);
  }

  async run(request: BlockRequest, options?: CallOptions): Promise<BlockResult> {
    return (await this.#call('run', [request], options)) as BlockResult;
  }

  /** Resolves to the response, in an array of its own. */
  async runRows(
    cycles: number,
    stimulus: Uint32Array,
    response?: Uint32Array,
    stride?: number,
  ): Promise<Uint32Array | undefined> {
    const args = [cycles, stimulus, response, stride];
    return (await this.#call('runRows', args)) as Uint32Array | undefined;
  }

  async runUntil(values: OutputValues, limit: number, options?: CallOptions): Promise<Reached> {
    if (typeof values === 'function') {
      throw new TypeError(
        'expected values of outputs, got a function, which no worker can be sent',
      );
    }
    return (await this.#call('runUntil', [values, limit], options)) as Reached;
  }

  async peek(name: string): Promise<Value> {
    return (await this.#call('peek', [name])) as Value;
  }

  async save(): Promise<SavedState> {
    return (await this.#call('save', [])) as SavedState;
  }

  async restore(state: SavedState | string): Promise<void> {
    await this.#call('restore', [state]);
  }

  async reset(): Promise<void> {
    await this.#call('reset', []);
  }

  /** Resolves to what ends the subscription. */
  async subscribe(listener: ChangeListener, names?: readonly string[]): Promise<() => void> {
    const id = this.#next;
    this.#listeners.set(id, listener);
    try {
      await this.#call('subscribe', [names]);
    } catch (error) {
      this.#listeners.delete(id);
      throw error;
    }
    return () => {
      if (this.#listeners.delete(id) && !this.#end) void this.#call('unsubscribe', [id]);
    };
  }

  /** Ends the worker; calls without answer are rejected. */
  dispose(): void {
    this.#close(new TypeError('expected a live model, got one that has been disposed of'));
  }

  #call(method: Method, args: readonly unknown[], options: CallOptions = {}): Promise<unknown> {
    const id = this.#next++;
    const { signal } = options;
    return new Promise((resolve, reject) => {
      if (this.#end) throw this.#end;
      signal?.throwIfAborted();
      const cancel = (): void => this.#thread.post({ id, cancel: true });
      const settled = <T>(settle: (value: T) => void) => {
        return (value: T): void => {
          signal?.removeEventListener('abort', cancel);
          settle(value);
        };
      };
      signal?.addEventListener('abort', cancel);
      this.#calls.set(id, { ...options, resolve: settled(resolve), reject: settled(reject) });
      this.#thread.post({ id, method, args });
    });
  }

  #receive(reply: Reply): void {
    if ('changes' in reply) {
      this.cycle = reply.cycle;
      this.#listeners.get(reply.id)?.(reply.changes, reply.cycle);
      return;
    }
    const call = this.#calls.get(reply.id);
    if (call === undefined) return;
    if ('done' in reply) {
      call.onProgress?.(reply.done);
      return;
    }
    this.#calls.delete(reply.id);
    this.cycle = reply.cycle;
    if ('error' in reply) call.reject(errorOf(reply.error, call.signal));
    else call.resolve(reply.result);
  }

  #close(error: Error): void {
    if (this.#end) return;
    this.#end = error;
    this.#thread.end();
    for (const { reject } of this.#calls.values()) reject(error);
    this.#calls.clear();
    this.#listeners.clear();
  }
}

function errorOf({ name, message, completed, place }: ErrorText, signal?: AbortSignal): unknown {
  if (name === CANCELLED && signal?.aborted) return signal.reason;
  if (completed !== undefined) return new RunFault(completed, { message, place: place ?? '' });
  const kinds = { RangeError, TypeError };
  return new (kinds[name as keyof typeof kinds] ?? Error)(message);
}
