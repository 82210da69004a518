import { readFileSync } from 'node:fs';
import { expect } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Diagnostics, headline } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { createEngine, type EngineName, engineNames } from '../../compiler/engines.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import type { Engine } from '../../runtime/engine.js';
import { RandomBits } from '../../runtime/random.js';
import { playValues } from '../support/portValues.js';

/** Values of ports by name. */
export type Values = Readonly<Record<string, number>>;

/**
 * One cycle of a model: takes the inputs, gives the outputs before the clock edge, and steps.
 * An output that it leaves out may have any value.
 */
export type Model = (inputs: Values) => Values;

/** Reads files of `modules/`, and perhaps a text of more modules, as one faultless design. */
export function rtlDesign(files: readonly string[], more?: string, top?: string): Design {
  const sources = files.map(
    (file) => new Source(file, readFileSync(new URL(`modules/${file}`, import.meta.url))),
  );
  if (more !== undefined) sources.push(new Source('more.v', more));
  const diagnostics = new Diagnostics();
  const circuit = readNetlist(sources, top === undefined ? {} : { top }, diagnostics);
  expect(diagnostics.list.map(headline)).toEqual([]);
  return designOf(circuit!);
}

/**
 * A module `any` with one instance of `module`, for other values of its parameters. `ports` are
 * written as in a module header, and connected to those of the same name.
 */
export function anyOf(
  module: string,
  parameters: Readonly<Record<string, number>>,
  ports: string,
): string {
  const words = ports.replaceAll(/\b(input|output)\b|\[.*?\]/g, '').split(',');
  const connections = words.map((word) => `.${word.trim()}(${word.trim()})`);
  const values = Object.entries(parameters).map(([name, value]) => `.${name}(${value})`);
  return `module any (${ports});
    ${module} #(${values.join(', ')}) it (${connections.join(', ')});
  endmodule`;
}

/** True once in `times`, by chance. */
export type Chance = (times: number) => boolean;

/** Random values for all inputs of a design; `shape` says which of them are not just any. */
export function randomInputs(
  { layout }: Design,
  seed: number,
  cycles: number,
  shape: (row: Values, chance: Chance, cycle: number) => Values = () => ({}),
): Values[] {
  const random = new RandomBits(seed);
  const chance: Chance = (times) => random.next() % times === 0;
  return Array.from({ length: cycles }, (_, cycle) => {
    const row = Object.fromEntries(
      layout.inputs.ports.map(({ name, width }) => [name, random.next() >>> (32 - width)]),
    );
    return { ...row, ...shape(row, chance, cycle) };
  });
}

/** Reads what came out of a run: an output port's value in a cycle. */
export type Reading = (port: string, cycle: number) => number;

/** Runs rows of inputs on each engine, from power-up at 0, and checks each run. */
export async function onEveryEngine(
  design: Design,
  rows: readonly Values[],
  check: (read: Reading, engine: EngineName) => void,
  engines: readonly EngineName[] = engineNames,
): Promise<void> {
  for (const name of engines) {
    const engine = await createEngine(design, name);
    engine.reset(powerUpState(design.circuit, 'zero'));
    check(readingOf(engine, rows), name);
  }
}

/** Plays rows of inputs on an engine from where it stands. */
export function readingOf(engine: Engine, rows: readonly Values[]): Reading {
  const read = playValues(engine, rows);
  return (port, cycle) => Number(read(port, cycle));
}

/** Runs a design and its model side by side, on each engine, from power-up at 0. */
export async function expectModel(
  design: Design,
  modelOf: () => Model,
  rows: readonly Values[],
  engines?: readonly EngineName[],
): Promise<void> {
  const check = (read: Reading, engine: EngineName): void => {
    expect(departure(design, modelOf(), rows, read), engine).toBeUndefined();
  };
  await onEveryEngine(design, rows, check, engines);
}

/** Where a run first departs from a model: its cycle, port, values and inputs. */
export function departure(
  { layout }: Design,
  model: Model,
  rows: readonly Values[],
  read: Reading,
): string | undefined {
  for (const [cycle, row] of rows.entries()) {
    for (const [name, value] of Object.entries(model(row))) {
      const { width } = layout.outputs.ports.find((port) => port.name === name)!;
      const should = Number(BigInt.asUintN(width, BigInt(value)));
      const is = read(name, cycle);
      if (is === should) continue;
      return `cycle ${cycle}: ${name} is ${is}, expected ${should}, for ${JSON.stringify(row)}`;
    }
  }
  return undefined;
}

/** The two's complement reading of a number of some bits. */
export const signed = (value: number, width: number): number =>
  (value << (32 - width)) >> (32 - width);
