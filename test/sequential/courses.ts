import { expect } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { type PowerUp, powerUpState } from '../../compiler/circuit/powerUp.js';
import { type CompileOptions, type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { createEngine, type EngineName, engineNames } from '../../compiler/engines.js';
import type { Engine } from '../../runtime/engine.js';
import { designFrom } from '../support/ownCircuits.js';
import { play } from '../support/rows.js';

/** How a course is run: as a design is compiled, and from which power-up (zero unless given). */
export interface CourseOptions extends CompileOptions {
  readonly powerUp?: PowerUp;
}

/** Reads a netlist, by the ending of its path; throws for anything the reader reports. */
export const circuitFrom = (text: string, path = 'part.v'): Circuit =>
  designFrom(new Source(path, text)).circuit;

/** Calls `use` with each engine of a design, powered up. */
export async function onEachEngine(
  design: Design,
  powerUp: PowerUp,
  use: (engine: Engine, name: EngineName) => void,
): Promise<void> {
  const state = powerUpState(design.circuit, powerUp);
  for (const name of engineNames) {
    const engine = await createEngine(design, name);
    engine.reset(state);
    use(engine, name);
  }
}

/** A power-up that suits the options: unknown where three values are asked for and no other. */
const powerUpOf = ({ powerUp, threeValued }: CourseOptions): PowerUp =>
  powerUp ?? (threeValued ? 'unknown' : 'zero');

/**
 * The response of every engine to rows as `packRows` takes them, as rows in the same form. Fails
 * where two engines differ.
 */
export async function responseTo(
  circuit: Circuit,
  rows: readonly string[],
  options: CourseOptions = {},
): Promise<string[]> {
  const design = designOf(circuit, options);
  let response: string[] | undefined;
  await onEachEngine(design, powerUpOf(options), (engine, name) => {
    const own = play(engine, rows);
    response ??= own;
    expect(own, name).toEqual(response);
  });
  return response!;
}

/**
 * Runs a course on every engine: a cycle a line, `INPUTS : OUTPUTS`, a digit a bit and ports in
 * order. What follows `//` is a remark.
 */
export async function expectCourse(
  circuit: Circuit,
  course: string,
  options: CourseOptions = {},
): Promise<void> {
  const lines = course
    .split('\n')
    .map((line) => line.replace(/\/\/.*/, '').trim())
    .filter((line) => line !== '')
    .map((line) => line.split(':').map((part) => part.trim().replace(/\s+/g, ' ')));
  const inputs = lines.map(([row]) => row!);
  const outputs = lines.map(([, row]) => row!.replaceAll(' ', ''));
  const response = await responseTo(circuit, inputs, options);
  const write = (row: string, i: number): string => `${inputs[i]} : ${row.replaceAll(' ', '')}`;
  expect(response.map(write)).toEqual(outputs.map(write));
}

/** The whole numbers from 0, written with so many binary digits. */
export const binary = (value: number, digits: number): string =>
  value.toString(2).padStart(digits, '0');
