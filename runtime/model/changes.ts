import type { PortLayout } from '../layout.js';
import type { Core } from './core.js';
import { checkNames, type FoundPort, type Ports } from './ports.js';
import { readValue, type Value } from './values.js';

/** Told which of the ports have other values than when it was told last. */
export type ChangeListener = (changes: Readonly<Record<string, Value>>, cycle: number) => void;

interface Subscription {
  readonly listener: ChangeListener;
  readonly watched: readonly FoundPort[];
  readonly last: Map<string, Value>;
}

/** Tells listeners of ports that have changed. */
export class Changes {
  readonly #core: Core;
  readonly #subscriptions = new Set<Subscription>();
  #isTelling = false;

  constructor(core: Core) {
    this.#core = core;
  }

  /** Adds a listener for some ports; the function returned takes it away. */
  subscribe(ports: Ports, listener: ChangeListener, names: readonly string[]): () => void {
    if (typeof listener !== 'function') {
      throw new TypeError(`expected a listener, got ${typeof listener}`);
    }
    const watched = checkNames(names).map((name) => ports.any(name));
    const subscription = { listener, watched, last: new Map<string, Value>() };
    for (const { port, isInput } of watched) {
      subscription.last.set(port.name, this.#value(port, isInput));
    }
    this.#subscriptions.add(subscription);
    return () => void this.#subscriptions.delete(subscription);
  }

  /**
   * Tells what has changed. A listener may change the model itself: that is told in a next round,
   * once all have been told of the change before.
   */
  tell(): void {
    if (this.#isTelling || this.#subscriptions.size === 0) return;
    this.#isTelling = true;
    try {
      while (this.#tellOnce());
    } finally {
      this.#isTelling = false;
    }
  }

  /** Forgets all listeners. */
  clear(): void {
    this.#subscriptions.clear();
  }

  #tellOnce(): boolean {
    let hasTold = false;
    for (const { listener, watched, last } of [...this.#subscriptions]) {
      const changes: [string, Value][] = [];
      for (const { port, isInput } of watched) {
        const value = this.#value(port, isInput);
        if (last.get(port.name) === value) continue;
        last.set(port.name, value);
        changes.push([port.name, value]);
      }
      if (changes.length === 0) continue;
      hasTold = true;
      listener(Object.fromEntries(changes), this.#core.cycle);
    }
    return hasTold;
  }

  #value(port: PortLayout, isInput: boolean): Value {
    const { layout } = this.#core;
    const row = isInput
      ? this.#core.row(this.#core.inputs, layout.inputs)
      : this.#core.row(this.#core.outputs(), layout.outputs);
    return readValue(row, port);
  }
}
