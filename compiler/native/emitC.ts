import { type Circuit, Priority } from '../circuit/circuit.js';
import { GateKind, gateInfo } from '../circuit/gates.js';
import { netName, primaryNames } from '../circuit/hierarchy.js';
import { NO_NET } from '../circuit/ids.js';
import { inputRowNets, outputRowNets } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';
import { type CWords, packedWords } from './cWords.js';
import { mainText } from './mainText.js';
import { obstacleToOneStep } from './oneStep.js';
import { settlingOrder } from './settlingOrder.js';

/** A C program that runs a design, or the reason why there is none. */
export type EmittedC = { readonly text: string } | { readonly obstacle: string };

/**
 * Writes a design as straight-line C: a yardstick for generated code.
 *
 * It is the circuit as read, through no pass of the compiler: one of `words` for each net that
 * outputs or registers depend on. `state` is the power-up state in the order
 * of `ModelLayout.stateNames`, 0 or 1 each. See `mainText` for how to call the program. There is
 * none for a design whose cycle is more than one settling and one commit.
 */
export function emitC(design: Design, state: Uint8Array, words: CWords = packedWords): EmittedC {
  const obstacle = obstacleToOneStep(design);
  if (obstacle !== undefined) return { obstacle };
  const { circuit, layout } = design;
  const { registers } = circuit;
  const order = settlingOrder(circuit, [
    ...registers.set.filter((net) => net !== NO_NET),
    ...registers.reset.filter((net) => net !== NO_NET),
    ...outputRowNets(circuit),
    ...registers.data,
  ]);
  if (order === undefined) return { obstacle: 'the logic has a loop' };
  const lines = [
    ...words.declarations,
    ...(registers.count > 0 ? [stateDeclaration(state, words)] : []),
    'static void step(const unsigned *in, unsigned *out)',
    '{',
    '  (void)in;',
    '  (void)out;',
    ...words.opening,
    ...new StepWriter(design, words).lines(order),
    '}',
  ];
  const main = mainText(words.rowNumbers(layout.inputs), words.rowNumbers(layout.outputs));
  return { text: `${lines.join('\n')}\n${main}` };
}

function stateDeclaration(state: Uint8Array, { type, ones: one, zeros }: CWords): string {
  const ones = Array.from(state.keys()).filter((index) => state[index] === 1);
  const initial = ones.map((index) => `[${index}] = ${one}`).join(', ') || zeros;
  return `static ${type} state[${state.length}] = {${initial}};`;
}

/** Writes the body of the function that runs one cycle. */
class StepWriter {
  readonly #circuit: Circuit;
  readonly #words: CWords;
  readonly #names: Int32Array;
  /** What a source net is read from, where it has a place of its own. */
  readonly #source: readonly (string | undefined)[];

  constructor(design: Design, words: CWords) {
    this.#circuit = design.circuit;
    this.#words = words;
    this.#names = primaryNames(design.circuit.hierarchy, design.circuit.netCount);
    this.#source = sourceExpressions(design, words);
  }

  lines(order: Uint32Array): string[] {
    const { registers } = this.#circuit;
    const lines = Array.from(
      order,
      (net) =>
        `  const ${this.#words.type} n${net} = ${this.#value(net)}; /* ${this.#name(net)} */`,
    );
    // Below the last read of the state, so that all registers change together.
    registers.data.forEach((net, i) => {
      lines.push(`  state[${i}] = ${controlled(this.#circuit, i, `n${net}`)};`);
    });
    return [...lines, ...this.#words.outputs(outputRowNets(this.#circuit))];
  }

  #value(net: number): string {
    const { kind, faninStart, fanin } = this.#circuit;
    const pins = Array.from(
      fanin.subarray(faninStart[net]!, faninStart[net + 1]!),
      (pin) => `n${pin}`,
    );
    if (kind[net] === GateKind.Mux) {
      // Compilers make of `?:` code that takes twice as long.
      const [select, zero, one] = pins;
      return `${zero} ^ (${select} & (${zero} ^ ${one}))`;
    }
    const { fold } = gateInfo(kind[net]!);
    const { ones, zeros } = this.#words;
    if (fold === undefined) return this.#source[net] ?? (kind[net] === GateKind.One ? ones : zeros);
    const folded = pins.join(` ${operators[fold.operation]} `);
    return fold.inverted ? `~(${folded})` : folded;
  }

  // Nothing in a name may end the comment or open another.
  #name(net: number): string {
    return netName(this.#circuit.hierarchy, this.#names, net).replace(/[^\w.[\]$ -]/g, '_');
  }
}

const operators = { and: '&', or: '|', xor: '^' } as const;

function sourceExpressions({ circuit, clocks }: Design, words: CWords): (string | undefined)[] {
  const expressions: (string | undefined)[] = new Array(circuit.netCount);
  inputRowNets(circuit, clocks).forEach((net, bit) => {
    if (net !== NO_NET) expressions[net] = words.input(bit);
  });
  // Outputs and data are taken while the clock is inactive, so it is a constant to them.
  for (const { net, inactive } of clocks.ports) {
    expressions[net] = inactive === 1 ? words.ones : words.zeros;
  }
  circuit.registers.output.forEach((net, i) => {
    expressions[net] = controlled(circuit, i, `state[${i}]`);
  });
  return expressions;
}

/** A register's value under its asynchronous set and reset; the one that wins comes last. */
function controlled({ registers }: Circuit, register: number, held: string): string {
  const set = registers.set[register]!;
  const reset = registers.reset[register]!;
  const withSet = (value: string) => (set === NO_NET ? value : `(${value} | n${set})`);
  const withReset = (value: string) => (reset === NO_NET ? value : `(${value} & ~n${reset})`);
  // Where neither wins, both active read as x, which is 0 here.
  return registers.priority[register] === Priority.SetWins
    ? withSet(withReset(held))
    : withReset(withSet(held));
}
