import { Worker } from 'node:worker_threads';
import type { LaneCount } from '../../runtime/laneLayout.js';
import type { LaneModel } from '../../runtime/laneModel.js';
import type { ModelLayout } from '../../runtime/layout.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import type { LanePrograms } from '../program/laneProgram.js';
import type { CyclePrograms } from '../program/program.js';
import { type EmitOptions, emitModel, loadBinaryen } from './emitModel.js';
import type { EmitRequest } from './emitWorker.js';
import { emitLanes } from './lanes/emitLanes.js';

/** Turns programs into models; gets ready as soon as it is made. */
export interface Emitter {
  emit(programs: CyclePrograms, layout: ModelLayout, options?: EmitOptions): Promise<WasmModel>;
  /** The same for programs of lanes. */
  emitLanes(programs: LanePrograms, layout: ModelLayout, lanes: LaneCount): Promise<LaneModel>;
  /** Lets go of what it holds. */
  close(): Promise<void>;
}

/**
 * An emitter in a thread of its own: loading Binaryen takes most of a second, in which the netlist
 * can be read. Close it when done; until then it does not keep the process alive.
 */
export function startEmitter(): Emitter {
  // A thread can only run what has been built; sources run by a loader emit where they are.
  return import.meta.url.endsWith('.ts') ? localEmitter() : new ThreadEmitter();
}

/** An emitter in the present thread. */
export function localEmitter(): Emitter {
  const binaryen = loadBinaryen();
  return {
    emit: async (programs, layout, options) => emitModel(await binaryen, programs, layout, options),
    emitLanes: async (programs, layout, lanes) =>
      emitLanes(await binaryen, programs, layout, lanes),
    close: async () => undefined,
  };
}

class ThreadEmitter implements Emitter {
  readonly #worker = new Worker(new URL('./emitWorker.js', import.meta.url));

  constructor() {
    this.#worker.unref();
  }

  emit(
    programs: CyclePrograms,
    layout: ModelLayout,
    options: EmitOptions = {},
  ): Promise<WasmModel> {
    return this.#ask({ programs, layout, options });
  }

  emitLanes(programs: LanePrograms, layout: ModelLayout, lanes: LaneCount): Promise<LaneModel> {
    return this.#ask({ programs, layout, lanes });
  }

  #ask<T>(request: EmitRequest): Promise<T> {
    const { promise, resolve, reject } = withResolvers<T>();
    this.#worker.ref();
    this.#worker.once('message', resolve);
    this.#worker.once('error', reject);
    this.#worker.postMessage(request);
    return promise.finally(() => this.#worker.unref());
  }

  async close(): Promise<void> {
    await this.#worker.terminate();
  }
}

function withResolvers<T>() {
  let resolve!: (value: T) => void;
  let reject!: (reason: Error) => void;
  const promise = new Promise<T>((onDone, onFailure) => {
    resolve = onDone;
    reject = onFailure;
  });
  return { promise, resolve, reject };
}
