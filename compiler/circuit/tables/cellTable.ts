import { X } from '../values.js';
import { Diagram, Leaf } from './diagram.js';
import { settledPart, withoutSettled } from './settledPart.js';
import type { EventSource } from './tableEvents.js';
import { beforeOf, RowDiagrams, stateOf, type TableRow } from './tableRows.js';

/** What a table does in runs of two or of three values. */
export interface TableForm {
  readonly diagram: Diagram;
  /** A function of levels and state that acts while the logic settles. */
  readonly settled: number;
  /**
   * The same for a cell in a combinational loop, which must not know for x what it does not know
   * for the values that the x stands for: else the loop would not come to an end.
   */
  readonly looped: number;
  /** The inputs that it depends on, in ascending order. */
  readonly settlers: readonly number[];
  /**
   * Per input: what its change makes of the state, a function of the levels, of its value before
   * the change (see `beforeOf`) and of the state; `Leaf.Hold` where it never does anything.
   */
  readonly events: readonly number[];
}

/**
 * The table of a cell, ready to be looked up.
 *
 * Inputs that change at the same moment are taken one after another, as IEEE 1364-2005 leaves it
 * open: `first` is their order where an input port has moved, `later` where a capture has. Either
 * begins with what decides the output alone. Clocks come next in the one, and see the other inputs
 * as they were; in the other they come last, so that they see what was captured together with
 * them, as registers do.
 */
export interface CellTable {
  /** Name of the primitive or cell. */
  readonly name: string;
  readonly inputs: number;
  readonly first: readonly number[];
  readonly later: readonly number[];
  /** Absent where the register, latch or gates beside it are all that two values need. */
  readonly two: TableForm | undefined;
  readonly three: TableForm;
  /** The clocks, with both edges where both count; none for a cell that is a register too. */
  readonly edges: readonly TableEdge[];
}

/** What the inputs of a table with state are for. */
export interface TableRoles {
  /** Inputs on which it depends what the levels alone decide, whichever input has changed. */
  readonly levels: readonly number[];
  /** Of these, the ones that decide alone, and the value with which they do. */
  readonly forcing: ReadonlyMap<number, number>;
  readonly clocks: readonly number[];
  /** Whether it is a register or latch, so that two values need no table. */
  readonly isRecognized: boolean;
  readonly edges: readonly TableEdge[];
}

/** An input of a table that is a clock, and the `Edge` it captures on. */
export interface TableEdge {
  readonly input: number;
  readonly edge: number;
}

/** Makes the table of a cell with state. */
export function sequentialTable(
  name: string,
  inputs: number,
  source: EventSource,
  roles: TableRoles,
): CellTable {
  const all = Array.from({ length: inputs }, (_, input) => input);
  const { levels, forcing, clocks, isRecognized } = roles;
  const alone = all.filter((input) => forcing.has(input));
  const ticking = clocks.filter((input) => !forcing.has(input));
  const taken = new Set([...alone, ...ticking]);
  const others = all.filter((input) => levels.includes(input) && !taken.has(input));
  const rest = all.filter((input) => !levels.includes(input) && !taken.has(input));
  return {
    name,
    inputs,
    first: [...alone, ...ticking, ...others, ...rest],
    later: [...alone, ...others, ...rest, ...ticking],
    two: isRecognized ? undefined : sequentialForm(inputs, source, roles, rest, 2),
    three: sequentialForm(inputs, source, roles, rest, 3),
    edges: roles.edges,
  };
}

/*
 * What the settled part decides need not be looked up again for each change. Of inputs that come
 * after all levels in either order that is only a saving. For levels and clocks of a register or
 * latch it means that levels which change at the same moment make no glitch, as they make none in
 * the register or latch.
 */
function sequentialForm(
  inputs: number,
  source: EventSource,
  { levels, forcing, clocks, isRecognized }: TableRoles,
  rest: readonly number[],
  values: 2 | 3,
): TableForm {
  const others = Array.from({ length: inputs }, (_, input) => input).filter(
    (input) => !levels.includes(input),
  );
  const order = [...levels, ...others, beforeOf(inputs), stateOf(inputs)];
  const diagram = new Diagram(order, values);
  const events = source(diagram, order);
  const settled = settledPart(diagram, events, levels);
  const shortened = events.map((event, input) => {
    if (rest.includes(input)) return withoutSettled(diagram, event, settled, levels);
    if (!isRecognized) return event;
    const where = clocks.includes(input) ? forcing : undefined;
    return withoutSettled(diagram, event, settled, levels, where);
  });
  return {
    diagram,
    settled,
    looped: cautious(diagram, settled),
    settlers: settlersOf(diagram, settled, inputs),
    events: shortened,
  };
}

/** Makes the table of a cell without state; its gates are what two values need. */
export function combinationalTable(
  name: string,
  inputs: number,
  { diagram, settled }: Pick<TableForm, 'diagram' | 'settled'>,
): CellTable {
  const settlers = settlersOf(diagram, settled, inputs);
  const events = new Array<number>(inputs).fill(Leaf.Hold);
  const looped = cautious(diagram, settled);
  const three = { diagram, settled, looped, settlers, events };
  return { name, inputs, first: [], later: [], two: undefined, three, edges: [] };
}

/** The three-valued function of the rows of a table without state. */
export function combinationalDiagram(
  rows: readonly TableRow[],
  inputs: number,
): Pick<TableForm, 'diagram' | 'settled'> {
  const levels = Array.from({ length: inputs }, (_, input) => input);
  const diagram = new Diagram([...levels, beforeOf(inputs), stateOf(inputs)], 3);
  const order = [...levels, beforeOf(inputs), stateOf(inputs)];
  return { diagram, settled: new RowDiagrams(diagram, order, inputs, rows).levels() };
}

/** The greatest function below one that is monotone: x where 0 and 1 in place of an x differ. */
function cautious(diagram: Diagram, root: number): number {
  const known = new Map<number, number>();
  const visit = (ref: number): number => {
    if (!diagram.isNode(ref)) return ref;
    const seen = known.get(ref);
    if (seen !== undefined) return seen;
    const [zero, one, unknown] = [0, 1, 2].map((value) => visit(diagram.branch(ref, value)));
    const both = diagram.compose([zero!, one!, unknown!], (values) =>
      values.every((value) => value === values[0]) ? values[0]! : X,
    );
    const made = diagram.node(diagram.variable(ref), zero!, one!, both);
    known.set(ref, made);
    return made;
  };
  return visit(root);
}

const settlersOf = (diagram: Diagram, settled: number, inputs: number): number[] =>
  [...diagram.support(settled)].filter((variable) => variable < inputs).sort((a, b) => a - b);
