import { Worker } from 'node:worker_threads';
import type { LaneCount } from '../../runtime/laneLayout.js';
import type { LaneModel } from '../../runtime/laneModel.js';
import type { ModelLayout } from '../../runtime/layout.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import type { DesignCycles, ModelOptions } from '../compile.js';
import type { EmitOptions } from '../emit/emitModel.js';
import { type Emitter, localEmitter } from '../emit/emitter.js';
import type { LanePrograms } from '../program/laneProgram.js';
import type { CyclePrograms } from '../program/program.js';

/** An emitter that can do the passes too, while the present thread does something else. */
export interface BackgroundCompiler extends Emitter {
  /** Gets ready for work that is likely to come. */
  prepare(): void;
  /** What `compile` makes of a design with these cycles and this layout. */
  compile(cycles: DesignCycles, layout: ModelLayout, options?: ModelOptions): Promise<WasmModel>;
}

/** What the thread is asked for; it answers with a `CompileAnswer` of the same number. */
export interface CompileRequest {
  readonly id: number;
  readonly layout: ModelLayout;
  readonly work:
    | { readonly programs: CyclePrograms; readonly options: EmitOptions }
    | { readonly lanePrograms: LanePrograms; readonly lanes: LaneCount }
    | { readonly cycles: DesignCycles; readonly options: ModelOptions };
}

/** The model asked for, or what went wrong. */
export interface CompileAnswer {
  readonly id: number;
  readonly model?: WasmModel | LaneModel;
  readonly error?: unknown;
}

/** Whether an emitter is one that can do the passes too. */
export const isBackground = (emitter: Emitter): emitter is BackgroundCompiler =>
  'compile' in emitter;

/**
 * A compiler in a thread of its own, which starts when it is asked to prepare or to work; only an
 * emitter in the present thread where sources are run by a loader, since a thread runs what has
 * been built. Close it when done; until then it does not keep the process alive.
 */
export const openCompiler = (): Emitter =>
  import.meta.url.endsWith('.ts') ? localEmitter() : new CompileThread();

class CompileThread implements BackgroundCompiler {
  readonly #waiting = new Map<number, (answer: CompileAnswer) => void>();
  #worker: Worker | undefined;
  #lastId = 0;

  prepare(): void {
    this.#started();
  }

  emit(programs: CyclePrograms, layout: ModelLayout, options: EmitOptions = {}) {
    return this.#ask<WasmModel>(layout, { programs, options });
  }

  emitLanes(lanePrograms: LanePrograms, layout: ModelLayout, lanes: LaneCount) {
    return this.#ask<LaneModel>(layout, { lanePrograms, lanes });
  }

  compile(cycles: DesignCycles, layout: ModelLayout, options: ModelOptions = {}) {
    return this.#ask<WasmModel>(layout, { cycles, options });
  }

  async close(): Promise<void> {
    await this.#worker?.terminate();
  }

  async #ask<Model extends WasmModel | LaneModel>(
    layout: ModelLayout,
    work: CompileRequest['work'],
  ): Promise<Model> {
    const id = ++this.#lastId;
    const answered = new Promise<CompileAnswer>((resolve) => this.#waiting.set(id, resolve));
    const worker = this.#started();
    worker.ref();
    worker.postMessage({ id, layout, work } satisfies CompileRequest);
    const { model, error } = await answered;
    if (model === undefined) throw error;
    return model as Model;
  }

  #started(): Worker {
    if (this.#worker !== undefined) return this.#worker;
    const worker = new Worker(new URL('./compileWorker.js', import.meta.url));
    worker.on('message', (answer: CompileAnswer) => this.#answer(answer.id, answer));
    worker.on('error', (error) => this.#failAll(error));
    worker.on('exit', () => this.#failAll(new Error('the compiler was closed')));
    // Last: to listen to messages is to wait for them.
    worker.unref();
    this.#worker = worker;
    return worker;
  }

  #answer(id: number, answer: CompileAnswer): void {
    this.#waiting.get(id)?.(answer);
    this.#waiting.delete(id);
    if (this.#waiting.size === 0) this.#worker?.unref();
  }

  #failAll(error: unknown): void {
    for (const id of this.#waiting.keys()) this.#answer(id, { id, error });
  }
}
