import type { Operator } from '../expression.js';
import type { Gate, LocalNet, Structure } from './structure.js';

/** A gate with one or two inputs. */
export interface Node {
  readonly operator: Operator;
  readonly inputs: readonly LocalNet[];
}

const inverted: Readonly<Partial<Record<Operator, Operator>>> = {
  nand: 'and',
  nor: 'or',
  xnor: 'xor',
};

/** The logic of a module, broken down to gates of at most two inputs. */
export class LogicGraph {
  /** The gate that drives a net; nets without are sources. */
  readonly nodes = new Map<LocalNet, Node>();
  /** Names of the nets by number; empty for those made here. */
  readonly netNames: string[];

  constructor({ gates, netNames }: Structure) {
    this.netNames = [...netNames];
    for (const gate of gates) this.#decompose(gate);
  }

  /** A new net without a name. */
  net(): LocalNet {
    return this.netNames.push('') - 1;
  }

  /** Adds a gate and returns its output. */
  add(operator: Operator, ...inputs: readonly LocalNet[]): LocalNet {
    const output = this.net();
    this.nodes.set(output, { operator, inputs });
    return output;
  }

  /** How many gates read each net. */
  fanOut(): Map<LocalNet, number> {
    const counts = new Map<LocalNet, number>();
    for (const { inputs } of this.nodes.values()) {
      for (const net of inputs) counts.set(net, (counts.get(net) ?? 0) + 1);
    }
    return counts;
  }

  /** The driven nets, each after those that its gate reads. */
  inOrder(): LocalNet[] {
    const order: LocalNet[] = [];
    const state = new Map<LocalNet, 'open' | 'done'>();
    for (const root of this.nodes.keys()) {
      const stack = [root];
      while (stack.length > 0) {
        const net = stack.at(-1)!;
        const node = this.nodes.get(net);
        if (node === undefined || state.get(net) === 'done') stack.pop();
        else if (state.get(net) === 'open') {
          state.set(net, 'done');
          order.push(net);
          stack.pop();
        } else {
          state.set(net, 'open');
          stack.push(...node.inputs.filter((input) => !state.has(input)));
        }
      }
    }
    return order;
  }

  #decompose({ kind, output, inputs }: Gate): void {
    if (inputs.length === 1) {
      const operator = kind === 'not' || kind in inverted ? 'not' : 'buf';
      this.nodes.set(output, { operator, inputs });
      return;
    }
    const plain = inverted[kind] ?? kind;
    let level = [...inputs];
    while (level.length > 2) {
      const next: LocalNet[] = [];
      for (let i = 0; i < level.length; i += 2) {
        const [left, right] = level.slice(i, i + 2);
        next.push(right === undefined ? left! : this.add(plain, left!, right));
      }
      level = next;
    }
    this.nodes.set(output, { operator: kind, inputs: level });
  }
}
