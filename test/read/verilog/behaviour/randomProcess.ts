import fc from 'fast-check';

/** Values of variables and inputs by name: three bits each, and above them three that tell of z. */
export type Values = Record<string, number>;

/** All three bits z. */
const FLOATING = 0o70;

/** A piece of Verilog and what it does, worked out without the compiler. */
interface Meaning<R> {
  readonly text: string;
  readonly run: (state: State) => R;
}

/** Some bits of a variable and what is assigned to them. */
interface Write {
  readonly name: string;
  readonly mask: number;
  readonly value: number;
}

/** What a process works on: values now, and those that non-blocking assignments leave for later. */
interface State {
  readonly now: Values;
  readonly later: Write[];
}

/** A statement and its effect on a state. */
export type Process = Meaning<void>;

type Value = Meaning<number>;

function value(names: readonly string[]): fc.Arbitrary<Value> {
  const leaf = fc.oneof(
    fc.constantFrom(...names).map((name): Value => ({ text: name, run: ({ now }) => now[name]! })),
    fc.nat(7).map((n): Value => ({ text: `3'd${n}`, run: () => n })),
  );
  return fc.oneof(
    leaf,
    fc.tuple(leaf, fc.constantFrom('+', '-', '&', '^'), leaf).map(([a, operator, b]): Value => {
      const compute = operators[operator]!;
      return {
        text: `(${a.text} ${operator} ${b.text})`,
        run: (state) => compute(a.run(state), b.run(state)) & 7,
      };
    }),
  );
}

/** A value that may be z, in one branch of a conditional or some bits of a concatenation. */
function floating(values: fc.Arbitrary<Value>): fc.Arbitrary<Value> {
  return fc.tuple(fc.nat(4), values, values, values).map(([kind, a, b, c]): Value => {
    if (kind === 0) return { text: "'bz", run: () => FLOATING };
    if (kind === 1) return { text: "{1'bz, 2'd1}", run: () => 0o41 };
    if (kind === 2) return a;
    return {
      text: `(${a.text} < ${b.text} ? ${c.text} : 3'bz)`,
      run: (state) => (a.run(state) < b.run(state) ? c.run(state) : FLOATING),
    };
  });
}

const operators: Readonly<Record<string, (a: number, b: number) => number>> = {
  '+': (a, b) => a + b,
  '-': (a, b) => a - b,
  '&': (a, b) => a & b,
  '^': (a, b) => a ^ b,
};

function carryOut({ name, mask, value: bits }: Write, values: Values): void {
  values[name] = (values[name]! & ~mask) | (bits & mask);
}

/** Lets a process run once: what it assigns by `<=` comes last, in the order of the text. */
export function step(process: Process, values: Values): void {
  const state: State = { now: values, later: [] };
  process.run(state);
  for (const write of state.later) carryOut(write, values);
}

/** How a variable is assigned: `either` for both ways in turn; and whether it may be z. */
type Targets = Readonly<Record<string, { readonly by: '=' | '<=' | 'either'; readonly z?: true }>>;

function assignment(targets: Targets, values: fc.Arbitrary<Value>): fc.Arbitrary<Process> {
  const write = (name: string, index: (state: State) => [number, number], v: Value) => {
    return (state: State): Write => {
      const [at, width] = index(state);
      const bits = (((1 << width) - 1) << at) & 7;
      const all = v.run(state);
      const z = (all >> 3) << at;
      return { name, mask: (bits << 3) | bits, value: ((z & 7) << 3) | ((all << at) & 7) };
    };
  };
  const name = fc.constantFrom(...Object.keys(targets));
  const places = fc.oneof(
    fc.constant({ text: '', at: (): [number, number] => [0, 3] }),
    fc.nat(2).map((i) => ({ text: `[${i}]`, at: (): [number, number] => [i, 1] })),
    fc.constant({ text: '[2:1]', at: (): [number, number] => [1, 2] }),
    fc.constant({ text: '[a]', at: ({ now }: State): [number, number] => [now.a!, 1] }),
    fc.constant({ text: '[b +: 2]', at: ({ now }: State): [number, number] => [now.b!, 2] }),
  );
  const all = fc.tuple(name, places, values, floating(values), fc.boolean());
  return all.map(([to, place, known, maybe, isBlocking]): Process => {
    const { by, z } = targets[to]!;
    const operator = by !== 'either' ? by : isBlocking ? '=' : '<=';
    const v = z ? maybe : known;
    const writeOf = write(to, place.at, v);
    return {
      text: `${to}${place.text} ${operator} ${v.text};`,
      run: (state) => {
        if (operator === '=') carryOut(writeOf(state), state.now);
        else state.later.push(writeOf(state));
      },
    };
  });
}

/** Random statements that assign `targets`, with expressions over `names`. */
export function processes(targets: Targets, names: readonly string[]): fc.Arbitrary<Process> {
  const values = value(names);
  return fc.letrec<{ statement: Process }>((tie) => ({
    statement: fc.oneof(
      { maxDepth: 4, depthSize: 'medium' },
      assignment(targets, values),
      fc
        .tuple(values, values, tie('statement'), fc.option(tie('statement')))
        .map(
          ([a, b, one, zero]): Process => ({
            text: `if (${a.text} < ${b.text}) ${one.text} ${zero === null ? '' : `else ${zero.text}`}`,
            run: (state) => (a.run(state) < b.run(state) ? one : zero)?.run(state),
          }),
        )
        // Nested ifs would take each other's else.
        .map(({ text, run }) => ({ text: `begin ${text} end`, run })),
      fc
        .tuple(
          values,
          fc.array(fc.tuple(fc.nat(7), tie('statement')), { maxLength: 5 }),
          tie('statement'),
        )
        .map(([subject, items, otherwise]): Process => caseOf(subject, items, otherwise)),
      fc.array(tie('statement'), { minLength: 1, maxLength: 4 }).map(
        (parts): Process => ({
          text: `begin ${parts.map(({ text }) => text).join(' ')} end`,
          run: (state) => {
            for (const part of parts) part.run(state);
          },
        }),
      ),
    ),
  })).statement;
}

// Without a default where the number of items is odd.
function caseOf(
  subject: Value,
  items: readonly (readonly [number, Process])[],
  otherwise: Process,
): Process {
  const hasDefault = items.length % 2 === 0;
  const lines = items.map(([label, { text }]) => `3'd${label}: ${text}`);
  if (hasDefault) lines.push(`default: ${otherwise.text}`);
  return {
    text: `case (${subject.text}) ${lines.join(' ')} endcase`,
    run: (state) => {
      const chosen = subject.run(state);
      const item = items.find(([label]) => label === chosen);
      (item?.[1] ?? (hasDefault ? otherwise : undefined))?.run(state);
    },
  };
}
