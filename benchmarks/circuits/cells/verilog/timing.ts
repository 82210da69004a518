import { type Cell, type Pin, pinNames } from '../cell.js';
import { type Expression, pinsRead, truthTable } from '../expression.js';

/** A delay in ns: it falls with the drive and grows with the place of the pin. */
const delay = (cell: Cell, place: number): string =>
  `(${[1, 1.2].map((slope) => (slope * (0.02 + 0.008 * place + 0.05 / cell.drive)).toFixed(3)).join(', ')})`;

/** Path delays of a function: the sign tells whether the output follows or opposes the input. */
export function logicPaths(cell: Cell, output: string, is: Expression): string[] {
  const read = pinsRead(is);
  const table = truthTable(is, read);
  return read.flatMap((input, place) => {
    const value = delay(cell, place);
    const sign = unateness(table, place, read.length);
    if (sign !== '') return [`(${input} ${sign}=> ${output}) = ${value};`];
    const other = read[(place + 1) % read.length]!;
    const path = `(${input} => ${output}) = ${value};`;
    return [`if (${other}) ${path}`, `if (~${other}) ${path}`, `ifnone ${path}`];
  });
}

/** `+` where the output never falls as the input rises, `-` where it never rises. */
export function unateness(table: bigint, input: number, count: number): '+' | '-' | '' {
  let rises = false;
  let falls = false;
  for (let row = 0; row < 1 << count; row++) {
    if ((row >> input) & 1) continue;
    const [low, high] = [row, row | (1 << input)].map((i) => (table >> BigInt(i)) & 1n);
    if (low! < high!) rises = true;
    if (low! > high!) falls = true;
  }
  return rises && falls ? '' : rises ? '+' : '-';
}

/** The names of a pin's bits. */
export const bitsOfPin = ({ name, width }: Pin): string[] =>
  width === 1 ? [name] : Array.from({ length: width }, (_, i) => `${name}[${i}]`);

/** Path delays from an edge of the clock to every output. */
export function clockPaths(cell: Cell, clock: string, edge: 'posedge' | 'negedge'): string[] {
  const outputs = cell.pins.filter(({ direction }) => direction === 'output').flatMap(bitsOfPin);
  const data = cell.pins.filter(({ name }) => /^d\d*$/.test(name)).flatMap(bitsOfPin);
  return outputs.map((output, i) => {
    const sign = output.startsWith('qn') ? '-' : '+';
    const source = data[i % data.length]!;
    return `(${edge} ${clock} => (${output} ${sign}: ${source})) = ${delay(cell, i)};`;
  });
}

/** Path delays from a control that is active at 0 to every output. */
export function controlPaths(cell: Cell): string[] {
  const outputs = cell.pins.filter(({ direction }) => direction === 'output').flatMap(bitsOfPin);
  return pinNames(cell, 'input')
    .filter((name) => name === 'clr_n' || name === 'set_n')
    .flatMap((name) => {
      const value = name === 'set_n' ? "1'b1" : "1'b0";
      return outputs.map((output) => {
        const sign = output.startsWith('qn') ? '-' : '+';
        return `(negedge ${name} *> (${output} ${sign}: ${value})) = ${delay(cell, 2)};`;
      });
    });
}

/** What the timing checks of a cell with state are about. */
export interface CheckedPins {
  readonly edge: 'posedge' | 'negedge';
  readonly clock: string;
  /** Bits that have to be steady around the edge. */
  readonly data: readonly string[];
  readonly controls: readonly string[];
  /** A net that is 1 where the checks count; none for always. */
  readonly condition: string | undefined;
  /** The net that a timing check delays a pin to; undefined where the model reads the pin. */
  readonly delayed: ((bit: string) => string) | undefined;
}

/** Timing checks that toggle `notifier` (IEEE 1364-2005, clause 15). */
export function timingChecks(pins: CheckedPins): string[] {
  const { edge, clock, data, controls, condition, delayed } = pins;
  const active = `${edge} ${clock}${condition === undefined ? '' : ` &&& ${condition}`}`;
  const tail = (reference: string, other: string): string =>
    delayed === undefined ? 'notifier' : `notifier, , , ${delayed(reference)}, ${delayed(other)}`;
  const setup = data.flatMap((bit) =>
    ['posedge', 'negedge'].map(
      (change) => `$setuphold(${active}, ${change} ${bit}, t_setup, -0.010, ${tail(clock, bit)});`,
    ),
  );
  const recovery = controls.map(
    (control) =>
      `$recrem(posedge ${control}, ${edge} ${clock}, 0.050:0.060:0.080, 0.020, ` +
      `${tail(control, clock)});`,
  );
  const widths = [
    ...['posedge', 'negedge'].map((level) => `${level} ${clock}`),
    ...controls.map((control) => `negedge ${control}`),
  ].map((event) => `$width(${event}, 0.100, 0, notifier);`);
  return ['specparam t_setup = 0.040:0.050:0.070;', ...setup, ...recovery, ...widths];
}
