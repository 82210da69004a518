import { deserialize, serialize } from 'node:v8';
import type { WasmModel } from '../../runtime/wasmModel.js';
import type { Design, ModelOptions } from '../compile.js';
import type { CacheStore } from './cacheStore.js';

/** Models that have been compiled before, of designs of one circuit. */
export class ModelCache {
  readonly #store: CacheStore;
  readonly #circuit: string;

  /** `circuit` is what `NetlistCache` tells the circuit by. */
  constructor(store: CacheStore, circuit: string) {
    this.#store = store;
    this.#circuit = circuit;
  }

  /**
   * The model that `compile` would make of a design, if it is known. The design's circuit may have
   * other outputs than the one that was read; else it must be that.
   */
  find(design: Design, options: ModelOptions): WasmModel | undefined {
    const entry = this.#store.get(this.#keyOf(design, options));
    if (entry === undefined) return undefined;
    return { ...(deserialize(entry) as Omit<WasmModel, 'layout'>), layout: design.layout };
  }

  /** Notes a model that has been compiled. */
  keep(design: Design, options: ModelOptions, model: WasmModel): void {
    this.#store.later(this.#keyOf(design, options), () => {
      const { layout, ...rest } = model;
      return serialize(rest);
    });
  }

  #keyOf({ circuit, clocks, schedule, layout }: Design, options: ModelOptions): string {
    const { threeValued } = layout;
    const { outputs } = circuit;
    const { ports } = clocks;
    return this.#store.keyOf(
      'model',
      this.#circuit,
      ports,
      schedule,
      threeValued,
      outputs,
      options,
    );
  }
}
