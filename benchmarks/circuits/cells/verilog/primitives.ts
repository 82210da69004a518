import type { Controls } from '../cell.js';
import { primitiveName } from '../cell.js';
import { primeImplicants } from './implicants.js';

/** A user-defined primitive (IEEE 1364-2005, clause 8). */
export interface Primitive {
  readonly name: string;
  readonly lines: readonly string[];
}

/** A primitive of a truth table, as `primeImplicants` takes it. */
export function logicPrimitive(what: string, inputs: readonly string[], table: bigint): Primitive {
  const all = (1n << (1n << BigInt(inputs.length))) - 1n;
  const rows = (value: 0 | 1) =>
    primeImplicants(value === 1 ? table : all ^ table, inputs.length).map(
      (cube) => `    ${[...cube].join(' ')} : ${value} ;`,
    );
  return primitive(primitiveName(what), inputs, false, [...rows(0), ...rows(1)]);
}

/** What tells the primitives of flip-flops apart. */
export interface FlopKind extends Controls {
  readonly edge: 'rise' | 'fall';
  readonly hasEnable: boolean;
}

/** Inputs `d`, `en` if it has one, `ck`, `set_n`, `clr_n` and the notifier `note`. */
export function flopPrimitive(kind: FlopKind): Primitive {
  const words = [
    'flop',
    ...(kind.edge === 'fall' ? ['fall'] : []),
    ...(kind.hasEnable ? ['enable'] : []),
    ...controlWords(kind),
  ];
  const columns = ['d', ...(kind.hasEnable ? ['en'] : []), 'ck', ...controlColumns(kind), 'note'];
  const [from, to] = kind.edge === 'rise' ? '01' : '10';
  const capture = `(${from}${to})`;
  const doubtful = [`(${from}x)`, `(x${to})`];
  const enabled = { en: '1' };
  const rows: TableRow[] = [
    [{ d: '0', ck: capture, ...enabled, set_n: '1' }, '?', '0'],
    [{ d: '1', ck: capture, ...enabled, clr_n: '1' }, '?', '1'],
    ...doubtful.flatMap((ck): TableRow[] => [
      [{ d: '0', ck, ...enabled, set_n: '1' }, '0', '0'],
      [{ d: '1', ck, ...enabled, clr_n: '1' }, '1', '1'],
    ]),
    ...(kind.hasEnable ? enableRows(capture, doubtful) : []),
    [{ ck: `(${to}?)` }, '?', '-'],
    [{ ck: `(?${from})` }, '?', '-'],
    [{ d: '*' }, '?', '-'],
    ...controlRows(kind),
    [{ note: '*' }, '?', 'x'],
  ];
  return statePrimitive(words.join('_'), columns, rows);
}

function enableRows(capture: string, doubtful: readonly string[]): TableRow[] {
  return [
    ...[capture, ...doubtful].map((ck): TableRow => [{ ck, en: '0' }, '?', '-']),
    [{ d: '0', ck: capture, en: 'x', set_n: '1' }, '0', '0'],
    [{ d: '1', ck: capture, en: 'x', clr_n: '1' }, '1', '1'],
    [{ en: '*' }, '?', '-'],
  ];
}

/** Inputs `d`, `g`, `set_n`, `clr_n` and the notifier `note`; open while `g` is 1. */
export function latchPrimitive(kind: Controls): Primitive {
  const columns = ['d', 'g', ...controlColumns(kind), 'note'];
  const rows: TableRow[] = [
    [{ d: '0', g: '1', set_n: '1' }, '?', '0'],
    [{ d: '1', g: '1', clr_n: '1' }, '?', '1'],
    [{ d: '0', g: 'x', set_n: '1' }, '0', '0'],
    [{ d: '1', g: 'x', clr_n: '1' }, '1', '1'],
    [{ g: '(?0)' }, '?', '-'],
    [{ d: '*', g: '0' }, '?', '-'],
    ...controlRows(kind),
    [{ note: '*' }, '?', 'x'],
  ];
  return statePrimitive(['latch', ...controlWords(kind)].join('_'), columns, rows);
}

/** Symbols by column, those left out are `?`; the state before; the state after. */
type TableRow = readonly [symbols: Readonly<Record<string, string>>, before: string, after: string];

function controlColumns({ clear, preset }: Controls): string[] {
  return [...(preset ? ['set_n'] : []), ...(clear ? ['clr_n'] : [])];
}

function controlWords(kind: Controls): string[] {
  const both = kind.clear && kind.preset;
  const names = [...(kind.preset ? ['preset'] : []), ...(kind.clear ? ['clear'] : [])];
  return both ? [...names, kind.wins] : names;
}

function controlRows({ clear, preset, wins }: Controls): TableRow[] {
  const rows: TableRow[] = [];
  if (clear) {
    rows.push([{ clr_n: '0', ...(wins === 'preset' && { set_n: '1' }) }, '?', '0']);
    rows.push([{ clr_n: '(?1)' }, '?', '-'], [{ clr_n: '(?x)', set_n: '1' }, '0', '0']);
  }
  if (preset) {
    rows.push([{ set_n: '0', ...(wins === 'clear' && { clr_n: '1' }) }, '?', '1']);
    rows.push([{ set_n: '(?1)' }, '?', '-'], [{ set_n: '(?x)', clr_n: '1' }, '1', '1']);
  }
  return rows;
}

function statePrimitive(
  what: string,
  columns: readonly string[],
  rows: readonly TableRow[],
): Primitive {
  const lines = rows.map(([symbols, before, after]) => {
    const cells = columns.map((column) => (symbols[column] ?? '?').padStart(5));
    return `  ${cells.join('')} : ${before} : ${after} ;`;
  });
  return primitive(primitiveName(what), columns, true, lines);
}

function primitive(
  name: string,
  inputs: readonly string[],
  hasState: boolean,
  rows: readonly string[],
): Primitive {
  const output = hasState ? 'q' : 'y';
  return {
    name,
    lines: [
      `primitive ${name} (${[output, ...inputs].join(', ')});`,
      `  output ${output};`,
      ...(hasState ? [`  reg ${output};`] : []),
      `  input ${inputs.join(', ')};`,
      '  table',
      `    // ${inputs.join(' ')} : ${hasState ? 'q : next' : output}`,
      ...rows,
      '  endtable',
      'endprimitive',
      '',
    ],
  };
}
