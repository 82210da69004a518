import { type FlipFlop, flatten, type Gate } from './flatten.js';

/** A written circuit at work: zero delay, two values, all flip-flops on one rising edge. */
export interface Evaluator {
  /** Sets an input of the top module. */
  set(port: string, value: bigint | number): void;
  /** The settled value of a net, by its hierarchical name. */
  get(name: string): bigint;
  /** Lets rising edges of the clock pass. */
  clock(cycles?: number): void;
}

/**
 * Evaluates the last module of a text. Flip-flops start at their initial value or at 0; a reset
 * may not depend on another flip-flop.
 */
export function evaluate(text: Iterable<string>): Evaluator {
  const { gates, flipFlops, vectors, nets } = flatten([...text].join(''));
  const values = new Uint8Array(nets);
  values[1] = 1;
  for (const { q, reset, value } of flipFlops) if (reset === undefined) values[q] = value;
  const settle = compile(settling(gates, flipFlops), values);
  const capture = compile(capturing(flipFlops), values);
  const bitsOf = (name: string) => {
    const bits = vectors.get(name);
    if (!bits) throw new RangeError(`no net is named ${name}`);
    return bits;
  };
  let settled = false;
  return {
    set(port, value) {
      for (const [i, net] of bitsOf(port).entries()) {
        values[net] = Number((BigInt(value) >> BigInt(i)) & 1n);
      }
      settled = false;
    },
    get(name) {
      if (!settled) settle();
      settled = true;
      const digits = bitsOf(name).map((net) => values[net]);
      return BigInt(`0b${digits.reverse().join('')}`);
    },
    clock(cycles = 1) {
      for (let cycle = 0; cycle < cycles; cycle++) {
        if (!settled) settle();
        capture();
        settled = false;
      }
    },
  };
}

function compile(statements: readonly string[], values: Uint8Array): () => void {
  return new Function('v', `return () => {${statements.join('\n')}}`)(values) as () => void;
}

const operators: Readonly<Record<string, readonly [operator: string, inversion: string]>> = {
  and: ['&', ''],
  nand: ['&', '^1'],
  or: ['|', ''],
  nor: ['|', '^1'],
  xor: ['^', ''],
  xnor: ['^', '^1'],
  buf: ['', ''],
  not: ['', '^1'],
};

function settling(gates: readonly Gate[], flipFlops: readonly FlipFlop[]): string[] {
  const resets = flipFlops.flatMap(({ q, reset, value }) =>
    reset === undefined ? [] : [`if (v[${reset}]) v[${q}] = ${value};`],
  );
  const logic = inOrder(gates).map(({ kind, output, inputs }) => {
    const [operator, inversion] = operators[kind]!;
    return `v[${output}] = (${inputs.map((net) => `v[${net}]`).join(operator)})${inversion};`;
  });
  return [...resets, ...logic];
}

function capturing(flipFlops: readonly FlipFlop[]): string[] {
  const reads = flipFlops.map(({ q, d, enable, reset, value }, i) => {
    const captured = enable === undefined ? `v[${d}]` : `v[${enable}] ? v[${d}] : v[${q}]`;
    return `const c${i} = ${reset === undefined ? '' : `v[${reset}] ? ${value} : `}${captured};`;
  });
  return [...reads, ...flipFlops.map(({ q }, i) => `v[${q}] = c${i};`)];
}

// Orders the gates so that each follows those it reads.
function inOrder(gates: readonly Gate[]): Gate[] {
  const driver = new Map<number, Gate>();
  for (const gate of gates) {
    if (driver.has(gate.output)) throw new SyntaxError(`net ${gate.output} has two drivers`);
    driver.set(gate.output, gate);
  }
  const placed = new Set<Gate>();
  for (const root of gates) {
    const stack = [root];
    while (stack.length > 0) {
      const gate = stack.at(-1)!;
      const waiting = gate.inputs.flatMap((net) => {
        const source = driver.get(net);
        return source && !placed.has(source) ? [source] : [];
      });
      if (waiting.length === 0) placed.add(stack.pop()!);
      else if (stack.length > 8 * gates.length) throw new SyntaxError('the gates form a loop');
      else stack.push(...waiting);
    }
  }
  return [...placed];
}
