import { RunFault } from '../../engine.js';
import type { BlockRequest } from '../block.js';
import type { OutputValues } from '../condition.js';
import { load } from '../load.js';
import type { Model } from '../model.js';
import { CANCELLED, type ErrorText, type Loaded, type Reply, type Request } from './protocol.js';

/** The worker's end of its connection: `self` of a web worker, `parentPort` in Node. */
export interface Port {
  postMessage(message: unknown, transfer?: Transferable[]): void;
  addEventListener?(type: 'message', listener: (event: MessageEvent) => void): void;
  on?(type: 'message', listener: (message: unknown) => void): void;
}

/** How long a run keeps messages waiting. */
const SLICE_MS = 40;

/** Serves a model to the thread that started this worker. */
export function serve(port: Port): void {
  const server = new Server(port);
  const receive = (message: unknown): void => server.receive(message as Request);
  if (port.on) port.on('message', receive);
  else port.addEventListener?.('message', ({ data }) => receive(data));
}

interface Steps {
  readonly isDone: boolean;
  readonly done: number;
  advance(): void;
}

class Server {
  readonly #port: Port;
  readonly #cancelled = new Set<number>();
  readonly #subscriptions = new Map<number, () => void>();
  #model: Model | undefined;
  #last: Promise<void> = Promise.resolve();
  #pending = 0;

  constructor(port: Port) {
    this.#port = port;
  }

  /** Calls are answered one after another; the wish to end one need not wait. */
  receive(request: Request): void {
    if ('cancel' in request) {
      if (this.#pending > 0) this.#cancelled.add(request.id);
      return;
    }
    this.#pending++;
    this.#last = this.#last.then(async () => {
      await this.#answer(request);
      this.#cancelled.delete(request.id);
      if (--this.#pending === 0) this.#cancelled.clear();
    });
  }

  async #answer({ id, method, args }: Exclude<Request, { cancel: true }>): Promise<void> {
    const cycle = () => this.#model?.cycle ?? 0;
    try {
      this.#stopIfCancelled(id);
      const answer = this[method] as (id: number, ...args: readonly unknown[]) => unknown;
      const result = await answer.call(this, id, ...args);
      this.#post({ id, result, cycle: cycle() }, buffersOf(result));
    } catch (error) {
      this.#post({ id, error: textOf(error), cycle: cycle() });
    }
  }

  async load(_id: number, ...args: readonly unknown[]): Promise<Loaded> {
    const model = await load(...(args as Parameters<typeof load>));
    this.#model = model;
    const { name, clocks, inputs, outputs, nets, memories, inputWords, outputWords } = model;
    return { name, clocks, inputs, outputs, nets, memories, inputWords, outputWords };
  }

  write(_id: number, values: unknown): void {
    this.#live.write(values as Parameters<Model['write']>[0]);
  }

  read(_id: number, ...names: readonly unknown[]): unknown {
    return this.#live.read(...(names as [string]));
  }

  async step(id: number, cycles: unknown = 1): Promise<void> {
    const request = { cycles: cycles as number, response: [] };
    await this.#slices(id, this.#live.block(request));
  }

  async run(id: number, request: unknown): Promise<unknown> {
    const block = this.#live.block(request as BlockRequest);
    await this.#slices(id, block);
    return block.result;
  }

  runRows(_id: number, cycles: unknown, stimulus: unknown, response: unknown, stride: unknown) {
    this.#live.runRows(...([cycles, stimulus, response, stride] as Parameters<Model['runRows']>));
    return response;
  }

  async runUntil(id: number, values: unknown, limit: unknown): Promise<unknown> {
    const search = this.#live.search(values as OutputValues, limit as number);
    await this.#slices(id, search);
    return { met: search.met, cycles: search.done };
  }

  peek(_id: number, name: unknown): unknown {
    return this.#live.peek(name as string);
  }

  save(): unknown {
    return this.#live.save();
  }

  restore(_id: number, state: unknown): void {
    this.#live.restore(state as string);
  }

  reset(): void {
    this.#live.reset();
  }

  subscribe(id: number, names: unknown): void {
    const end = this.#live.subscribe(
      (changes, cycle) => this.#post({ id, changes, cycle }),
      names as string[] | undefined,
    );
    this.#subscriptions.set(id, end);
  }

  unsubscribe(_id: number, subscription: unknown): void {
    this.#subscriptions.get(subscription as number)?.();
    this.#subscriptions.delete(subscription as number);
  }

  get #live(): Model {
    if (this.#model !== undefined) return this.#model;
    throw new TypeError('expected a loaded model, got none');
  }

  /** Goes through long work with pauses in which messages come through. */
  async #slices(id: number, steps: Steps): Promise<void> {
    let end = performance.now() + SLICE_MS;
    try {
      while (!steps.isDone) {
        steps.advance();
        if (performance.now() < end || steps.isDone) continue;
        this.#post({ id, done: steps.done });
        await new Promise((resolve) => setTimeout(resolve, 0));
        this.#stopIfCancelled(id);
        end = performance.now() + SLICE_MS;
      }
    } finally {
      this.#live.tell();
    }
  }

  #stopIfCancelled(id: number): void {
    if (!this.#cancelled.has(id)) return;
    throw Object.assign(new Error('cancelled'), { name: CANCELLED });
  }

  #post(reply: Reply, transfer: Transferable[] = []): void {
    this.#port.postMessage(reply, transfer);
  }
}

/** The buffers of the arrays that a block's result consists of: they move, and are not copied. */
function buffersOf(result: unknown): Transferable[] {
  if (result instanceof Uint32Array) return [result.buffer as ArrayBuffer];
  if (typeof result !== 'object' || result === null) return [];
  const { response, unknown } = result as Record<string, object | undefined>;
  return [response, unknown].flatMap((columns) =>
    Object.values(columns ?? {}).map(({ buffer }: Uint32Array) => buffer as ArrayBuffer),
  );
}

function textOf(error: unknown): ErrorText {
  if (!(error instanceof Error)) return { name: 'Error', message: String(error) };
  const { name, message } = error;
  if (!(error instanceof RunFault)) return { name, message };
  return { name, message, completed: error.completed, place: error.place };
}
