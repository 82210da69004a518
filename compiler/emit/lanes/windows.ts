import type { Step } from './planBlock.js';

/** An access as an address: a pointer's local, and an offset from it in bytes. */
export interface Address {
  readonly pointer: number;
  readonly offset: number;
}

/** A pointer to be set: local `pointer` becomes parameter `region` plus `by` bytes. */
export interface Move {
  readonly pointer: number;
  readonly region: number;
  readonly by: number;
}

/** Offsets below this take one byte in the machine code of x64, others four. */
const NEAR = 128;

/** Accesses that are looked at to find out whether moving a pointer pays. */
const AHEAD = 20;

/** A move costs an instruction as long as two long offsets: it pays from some near accesses on. */
const WORTHWHILE = 5;

/** Pointers that may be moved, by region. More would run short of registers. */
const MOVABLE: readonly number[] = [2, 1, 0, 1, 1];

/** Pointers that a block may need beside those of its regions. */
export const MOST_POINTERS = MOVABLE.reduce((sum, count) => sum + count, 0);

/**
 * Chooses the pointers through which a block's steps access memory: near ones where several
 * accesses are close together in place and time, since short offsets make short code.
 */
export class Windows {
  /** Places in each region that are accessed, in bytes and in order, and how many are done. */
  readonly #accesses: number[][] = MOVABLE.map(() => []);
  readonly #done: number[] = MOVABLE.map(() => 0);
  /** Per region: the pointers moved so far, the one that was used last in front. */
  readonly #moved: { readonly pointer: number; at: number }[][] = MOVABLE.map(() => []);
  readonly #wordBytes: number;
  #pointers: number;

  /** `firstPointer` is the first local free for pointers. */
  constructor(steps: readonly Step[], wordBytes: number, firstPointer: number) {
    this.#wordBytes = wordBytes;
    this.#pointers = firstPointer;
    for (const step of steps) {
      if (step.kind === 'load' || step.kind === 'store') {
        this.#accesses[step.region]!.push(step.slot * wordBytes);
      }
    }
  }

  /** The address of the next access to a region, and the move to be made before it. */
  access(region: number): { readonly address: Address; readonly move: Move | undefined } {
    const at = this.#accesses[region]![this.#done[region]!]!;
    const near = this.#nearPointer(region, at);
    const start = near === undefined && MOVABLE[region]! > 0 ? this.#windowFor(region, at) : -1;
    this.#done[region]!++;
    if (near !== undefined) return { address: near, move: undefined };
    if (start < 0) return { address: { pointer: region, offset: at }, move: undefined };
    const pointer = this.#move(region, start);
    return {
      address: { pointer, offset: at - start },
      move: { pointer, region, by: start },
    };
  }

  #nearPointer(region: number, at: number): Address | undefined {
    if (at < NEAR) return { pointer: region, offset: at };
    const moved = this.#moved[region]!;
    const found = moved.findIndex((window) => at >= window.at && at < window.at + NEAR);
    if (found < 0) return undefined;
    const [window] = moved.splice(found, 1);
    moved.unshift(window!);
    return { pointer: window!.pointer, offset: at - window!.at };
  }

  // The start of the window around a place that holds most of the accesses to come, or -1.
  #windowFor(region: number, at: number): number {
    const done = this.#done[region]!;
    const ahead = this.#accesses[region]!.slice(done, done + AHEAD);
    let [best, most] = [-1, WORTHWHILE - 1];
    for (let start = at; start > at - NEAR && start >= 0; start -= this.#wordBytes) {
      const count = ahead.filter((other) => other >= start && other < start + NEAR).length;
      if (count > most) [best, most] = [start, count];
    }
    return best;
  }

  #move(region: number, at: number): number {
    const moved = this.#moved[region]!;
    if (moved.length < MOVABLE[region]!) moved.push({ pointer: this.#pointers++, at });
    const window = moved.pop()!;
    window.at = at;
    moved.unshift(window);
    return window.pointer;
  }
}
