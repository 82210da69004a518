import { GrowableUint32 } from '../../../circuit/growable.js';
import { type NetId, netId } from '../../../circuit/ids.js';

const LEAST_SLOTS = 64;

/** Value of `GateTable.find` where there is no such gate. */
export const NO_GATE = -1;

/** Gates by kind and inputs: some thirty bytes for each, as a process may make millions. */
export class GateTable {
  /** An open hash table, half full at most: the number of a gate + 1, or 0. */
  #slots = new Int32Array(LEAST_SLOTS);
  // By number: the output, the kind, the hash, and where the inputs begin in `#inputs`.
  #outputs = new GrowableUint32(LEAST_SLOTS / 2);
  #kinds = new GrowableUint32(LEAST_SLOTS / 2);
  #hashes = new GrowableUint32(LEAST_SLOTS / 2);
  #starts = new GrowableUint32(LEAST_SLOTS / 2);
  #inputs = new GrowableUint32(LEAST_SLOTS);

  /** Forgets all gates. */
  clear(): void {
    if (this.#outputs.length === 0) return;
    if (this.#slots.length > LEAST_SLOTS) this.#slots = new Int32Array(LEAST_SLOTS);
    else this.#slots.fill(0);
    for (const column of this.#columns()) column.clear();
  }

  /** The output of a gate with these inputs in this order, or `NO_GATE`. */
  find(kind: number, inputs: readonly NetId[]): NetId | typeof NO_GATE {
    const hash = hashOf(kind, inputs);
    const slots = this.#slots;
    for (let slot = hash & (slots.length - 1); ; slot = (slot + 1) & (slots.length - 1)) {
      const number = slots[slot]! - 1;
      if (number < 0) return NO_GATE;
      if (this.#hashes.get(number) === hash && this.#is(number, kind, inputs)) {
        return netId(this.#outputs.get(number));
      }
    }
  }

  /** Adds a gate that is not there. */
  add(kind: number, inputs: readonly NetId[], output: NetId): void {
    const number = this.#outputs.length;
    if (2 * (number + 1) > this.#slots.length) this.#grow();
    const hash = hashOf(kind, inputs);
    this.#outputs.push(output);
    this.#kinds.push(kind);
    this.#hashes.push(hash);
    this.#starts.push(this.#inputs.length);
    this.#inputs.append(inputs, inputs.length);
    this.#enter(number, hash);
  }

  #columns(): readonly GrowableUint32[] {
    return [this.#outputs, this.#kinds, this.#hashes, this.#starts, this.#inputs];
  }

  #is(number: number, kind: number, inputs: readonly NetId[]): boolean {
    const start = this.#starts.get(number);
    const isLast = number + 1 === this.#starts.length;
    const end = isLast ? this.#inputs.length : this.#starts.get(number + 1);
    if (this.#kinds.get(number) !== kind || end - start !== inputs.length) return false;
    for (let i = 0; i < inputs.length; i++) {
      if (this.#inputs.get(start + i) !== inputs[i]) return false;
    }
    return true;
  }

  #enter(number: number, hash: number): void {
    const slots = this.#slots;
    let slot = hash & (slots.length - 1);
    while (slots[slot] !== 0) slot = (slot + 1) & (slots.length - 1);
    slots[slot] = number + 1;
  }

  #grow(): void {
    this.#slots = new Int32Array(2 * this.#slots.length);
    for (let i = 0; i < this.#outputs.length; i++) this.#enter(i, this.#hashes.get(i));
  }
}

// Multiply and rotate; the multiplier is 2^32 divided by the golden ratio (Knuth, TAOCP vol. 3, 6.4;
// from memory).
function hashOf(kind: number, inputs: readonly NetId[]): number {
  let hash = kind;
  for (let i = 0; i < inputs.length; i++) {
    hash = Math.imul(hash ^ inputs[i]!, 0x9e3779b1);
    hash = (hash << 15) | (hash >>> 17);
  }
  return (hash ^ (hash >>> 16)) >>> 0;
}
