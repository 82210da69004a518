import fc from 'fast-check';

/** What a program works on: four bits each, but for what leaves a block. */
export interface State {
  readonly now: Record<string, number>;
  readonly memory: number[];
  /** Non-blocking assignments, in order; their values are fixed. */
  readonly later: (() => void)[];
  /** How deep the block stands that `disable` is leaving. */
  left: number | undefined;
}

interface Value {
  readonly text: string;
  readonly run: (state: State) => number;
}

/** A statement: its text inside of blocks of given names, and what it does so many blocks deep. */
export interface Program {
  readonly text: (blocks: readonly string[], path: string) => string;
  readonly run: (state: State, depth: number) => void;
}

/** Variables: `p` and `q` are assigned non-blocking, `r` and `t` blocking, like the memory `m`. */
export const variables = ['p', 'q', 'r', 't'] as const;
const names = [...variables, 'a', 'b'];

/** Declarations that the text of a program needs. */
export const declarations = `
  reg [3:0] m [0:3]; integer i0, i1, i2, i3, i4, i5;
  function [3:0] pick(input [3:0] x, y);
    begin pick = y ^ 5; if (x[1]) pick = y; if (x[0]) pick = x + y; end
  endfunction
  function [3:0] lowest(input [3:0] x);
    integer k;
    begin : search
      lowest = b;
      for (k = 0; k < 4; k = k + 1) if (x[k]) begin lowest = k; disable search; end
    end
  endfunction
  task mix(input [3:0] x, inout [3:0] v);
    begin v = v + x; if (v[3]) v = v ^ x; end
  endtask`;

const bit = (value: number, place: number): number => (value >> place) & 1;
const signed = (value: number): number => (value << 28) >> 28;

function lowest(x: number, otherwise: number): number {
  return [0, 1, 2, 3].find((place) => bit(x, place) === 1) ?? otherwise;
}

const name = fc.constantFrom(...names);
const leaf: fc.Arbitrary<Value> = fc.oneof(
  name.map((n) => ({ text: n, run: ({ now }: State) => now[n]! })),
  fc.nat(15).map((n) => ({ text: `4'd${n}`, run: () => n })),
  name.map((n) => ({
    text: `m[${n}[1:0]]`,
    run: ({ now, memory }: State) => memory[now[n]! & 3]!,
  })),
  fc.tuple(name, name).map(([n, i]) => ({
    text: `{3'b0, ${n}[${i}[1:0]]}`,
    run: ({ now }: State) => bit(now[n]!, now[i]! & 3),
  })),
);

type Compute = (a: number, b: number, c: number, state: State) => number;

/** Texts of operations, with operands A, B and C, and what they give, cut to four bits. */
const operations: readonly (readonly [string, Compute])[] = [
  ['(A + B)', (a, b) => a + b],
  ['(A - B)', (a, b) => a - b],
  ['(A & B | ~C)', (a, b, c) => (a & b) | ~c],
  ['(A ^ B)', (a, b) => a ^ b],
  ['(A < B ? C : B)', (a, b, c) => (a < b ? c : b)],
  ['($signed(A) < $signed(B) ? C : A)', (a, b, c) => (signed(a) < signed(b) ? c : a)],
  ["(A << (B & 4'd3))", (a, b) => a << (b & 3)],
  ["{$signed(A) >>> (B & 4'd1)}", (a, b) => signed(a) >> (b & 1)],
  ['pick(A, B)', (a, b) => (a & 1 ? a + b : a & 2 ? b : b ^ 5)],
  ["{3'b000, ^(A)}", (a) => bit(a, 0) ^ bit(a, 1) ^ bit(a, 2) ^ bit(a, 3)],
  ['lowest(A)', (a, _b, _c, { now }) => lowest(a, now.b!)],
];

const value: fc.Arbitrary<Value> = fc.letrec<{ value: Value }>((tie) => ({
  value: fc.oneof(
    { maxDepth: 2 },
    leaf,
    fc
      .tuple(fc.constantFrom(...operations), tie('value'), tie('value'), tie('value'))
      .map(([[text, compute], a, b, c]) => ({
        text: text.replace(/[ABC]/g, (operand) => ({ A: a, B: b, C: c })[operand]!.text),
        run: (state: State) => compute(a.run(state), b.run(state), c.run(state), state) & 15,
      })),
  ),
})).value;

/** Puts the bits of a mask into a variable, now or later. */
function put(state: State, to: string, bits: number, mask: number): void {
  const write = () => {
    state.now[to] = (state.now[to]! & ~mask) | (bits & mask);
  };
  if (to === 'p' || to === 'q') state.later.push(write);
  else write();
}

const sign = (to: string): string => (to === 'p' || to === 'q' ? '<=' : '=');

/** What of a variable is assigned: text behind its name, place from the right, and width. */
const parts = fc.oneof(
  fc.constant({ text: '', place: (_: State) => 0, mask: 15 }),
  name.map((i) => ({ text: `[${i}[1:0]]`, place: ({ now }: State) => now[i]! & 3, mask: 1 })),
  name.map((i) => ({ text: `[${i} +: 2]`, place: ({ now }: State) => now[i]!, mask: 3 })),
);

const assignment: fc.Arbitrary<Program> = fc.oneof(
  fc.tuple(fc.constantFrom(...variables), parts, value).map(([to, part, v]) => ({
    text: () => `${to}${part.text} ${sign(to)} ${v.text};`,
    run: (state: State) => {
      const place = part.place(state);
      put(state, to, v.run(state) << place, (part.mask << place) & 15);
    },
  })),
  fc.tuple(name, parts, value).map(([i, part, v]) => ({
    text: () => `m[${i}[1:0]]${part.text} = ${v.text};`,
    run: (state: State) => {
      const [address, place] = [state.now[i]! & 3, part.place(state)];
      const mask = (part.mask << place) & 15;
      state.memory[address] = (state.memory[address]! & ~mask) | ((v.run(state) << place) & mask);
    },
  })),
  fc.constantFrom(['p', 'q'] as const, ['r', 't'] as const).chain(([high, low]) =>
    value.map((v) => ({
      text: () => `{${high}, ${low}[1:0]} ${sign(high)} {${v.text}, 2'b10} + ${low};`,
      run: (state: State) => {
        const sum = ((v.run(state) << 2) | 2) + state.now[low]!;
        put(state, high, sum >> 2, 15);
        put(state, low, sum, 3);
      },
    })),
  ),
  fc.tuple(fc.constantFrom('r', 't'), value).map(([to, v]) => ({
    text: () => `mix(${v.text}, ${to});`,
    run: (state: State) => {
      const x = v.run(state);
      const sum = (state.now[to]! + x) & 15;
      state.now[to] = bit(sum, 3) === 1 ? sum ^ x : sum;
    },
  })),
);

/** Runs parts of a block that stands `depth` deep, until one of them leaves it. */
function runBlock(body: readonly Program[], state: State, depth: number): void {
  for (const part of body) {
    if (state.left === undefined) part.run(state, depth + 1);
  }
  if (state.left === depth) state.left = undefined;
}

function blockText(body: readonly Program[], blocks: readonly string[], path: string): string {
  const own = `at${path}`;
  const texts = body.map((part, i) => part.text([...blocks, own], `${path}_${i}`));
  return `begin : ${own} ${texts.join(' ')} end`;
}

function forLoop(low: number, turns: number, to: string, body: readonly Program[]): Program {
  return {
    text: (blocks, path) => {
      const i = `i${blocks.length}`;
      const head = `for (${i} = ${low}; ${i} < ${low + turns}; ${i} = ${i} + 1)`;
      return `${head} begin ${to} ${sign(to)} ${to} + ${i}; ${blockText(body, blocks, path)} end`;
    },
    run: (state, depth) => {
      for (let i = low; i < low + turns && state.left === undefined; i++) {
        put(state, to, state.now[to]! + i, 15);
        runBlock(body, state, depth);
      }
    },
  };
}

interface Item {
  readonly label: number;
  readonly care: number;
  readonly body: Program;
}

function caseOf(word: string, subject: Value, items: readonly Item[], rest?: Program): Program {
  const digit = (item: Item, place: number): string => {
    if (bit(item.care, place) === 0 && word !== 'case') return word === 'casex' ? 'x' : '?';
    return `${bit(item.label, place)}`;
  };
  return {
    text: (blocks, path) => {
      const lines = items.map((item, i) => {
        const label = [3, 2, 1, 0].map((place) => digit(item, place)).join('');
        return `4'b${label}: ${item.body.text(blocks, `${path}_${i}`)}`;
      });
      if (rest !== undefined) lines.push(`default: ${rest.text(blocks, `${path}_rest`)}`);
      return `${word} (${subject.text}) ${lines.join(' ')} endcase`;
    },
    run: (state, depth) => {
      const x = subject.run(state);
      const matches = ({ label, care }: Item) =>
        ((x ^ label) & (word === 'case' ? 15 : care)) === 0;
      (items.find(matches)?.body ?? rest)?.run(state, depth);
    },
  };
}

function ifElse(condition: Value, one: Program, zero?: Program): Program {
  return {
    text: (blocks, path) =>
      `if (${condition.text}) begin ${one.text(blocks, `${path}_1`)} end` +
      (zero === undefined ? '' : ` else begin ${zero.text(blocks, `${path}_0`)} end`),
    run: (state, depth) => (condition.run(state) ? one : zero)?.run(state, depth),
  };
}

function leaveIf(condition: Value, levels: number): Program {
  return {
    text: (blocks) => `if (${condition.text}) disable ${blocks[levels % blocks.length]};`,
    run: (state, depth) => {
      if (condition.run(state)) state.left = levels % depth;
    },
  };
}

/** Random programs of all kinds of statements, at least one block deep. */
export const programs: fc.Arbitrary<Program> = fc.letrec<{ statement: Program; block: Program }>(
  (tie) => {
    const statement = tie('statement');
    const body = fc.array(statement, { minLength: 1, maxLength: 3 });
    const optional = fc.option(statement, { nil: undefined });
    const item = fc.record({ label: fc.nat(15), care: fc.nat(15), body: statement });
    return {
      block: body.map((all) => ({
        text: (blocks, path) => blockText(all, blocks, path),
        run: (state, depth) => runBlock(all, state, depth),
      })),
      statement: fc.oneof(
        { maxDepth: 4, depthSize: 'medium' },
        assignment,
        tie('block'),
        fc.tuple(value, statement, optional).map(([c, one, zero]) => ifElse(c, one, zero)),
        fc.tuple(value, fc.nat(5)).map(([c, levels]) => leaveIf(c, levels)),
        fc
          .tuple(fc.nat(2), fc.integer({ min: 1, max: 4 }), fc.constantFrom('r', 'p'), body)
          .map(([low, turns, to, all]) => forLoop(low, turns, to, all)),
        fc
          .tuple(
            fc.constantFrom('case', 'casez', 'casex'),
            value,
            fc.array(item, { minLength: 1, maxLength: 5 }),
            optional,
          )
          .map(([word, subject, items, rest]) => caseOf(word, subject, items, rest)),
      ),
    };
  },
).block;
