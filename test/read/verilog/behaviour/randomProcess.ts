import fc from 'fast-check';

/** Values of variables and inputs, three bits each, by name. */
export type Values = Record<string, number>;

/** A piece of Verilog and what it does, worked out without the compiler. */
interface Meaning<R> {
  readonly text: string;
  readonly run: (state: State) => R;
}

/** What a process works on: values now, and those that non-blocking assignments leave for later. */
export interface State {
  readonly now: Values;
  readonly later: Values;
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

const operators: Readonly<Record<string, (a: number, b: number) => number>> = {
  '+': (a, b) => a + b,
  '-': (a, b) => a - b,
  '&': (a, b) => a & b,
  '^': (a, b) => a ^ b,
};

/** How a variable is assigned, `=` or `<=`. */
type Targets = Readonly<Record<string, '=' | '<='>>;

function assignment(targets: Targets, values: fc.Arbitrary<Value>): fc.Arbitrary<Process> {
  const write = (name: string, index: (state: State) => [number, number]) => (v: Value) => {
    return (state: State): void => {
      const to = targets[name] === '=' ? state.now : state.later;
      const before = to[name] ?? state.now[name]!;
      const [at, width] = index(state);
      const mask = (((1 << width) - 1) << at) & 7;
      to[name] = (before & ~mask) | ((v.run(state) << at) & mask);
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
  return fc.tuple(name, places, values).map(([to, place, v]): Process => {
    return { text: `${to}${place.text} ${targets[to]} ${v.text};`, run: write(to, place.at)(v) };
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
