import type { Circuit } from '../../circuit/circuit.js';
import { type Loops, loopsOf, SettlingSources } from '../../circuit/loops.js';

/** The combinational loops of a circuit as the passes need them. */
export class LoopSet {
  readonly #loops: Loops;
  readonly #kept: Set<number>;
  readonly #outside: Uint32Array[];

  constructor(circuit: Circuit) {
    this.#loops = loopsOf(circuit);
    this.#kept = new Set(this.#loops.keptNets);
    const sources = new SettlingSources(circuit);
    this.#outside = this.#loops.nets.map((nets, loop) => {
      const outside = new Set<number>();
      for (const net of nets) {
        for (let i = 0, source = sources.at(net, 0); source !== -1; ) {
          if (this.#loops.loopOf[source] !== loop) outside.add(source);
          source = sources.at(net, ++i);
        }
      }
      return Uint32Array.from(outside);
    });
  }

  /** The loop that a net belongs to, or -1. */
  loopOf(net: number): number {
    return this.#loops.loopOf[net]!;
  }

  /** The nets of a loop in the order of evaluation. */
  nets(loop: number): Uint32Array {
    return this.#loops.nets[loop]!;
  }

  /** The nets that a loop reads and does not hold. */
  outside(loop: number): Uint32Array {
    return this.#outside[loop]!;
  }

  /** Whether a loop remembers a gate's value from one settling to the next. */
  isKept(net: number): boolean {
    return this.#kept.has(net);
  }
}
