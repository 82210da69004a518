import {
  areaOf,
  type Cell,
  type LogicCell,
  type Pin,
  pinNames,
  primitiveName,
  type TriStateCell,
} from '../cell.js';
import { assigned, gatesFor } from './gates.js';
import { logicPaths } from './timing.js';

/** The two ways in which the library models a cell, chosen by the macro HOBNAIL_FUNCTIONAL. */
export interface Models {
  readonly functional: readonly string[];
  readonly timing: readonly string[];
}

/** A module as a cell of the library, with both models and, where asked for, power pins. */
export function cellModule(cell: Cell, { functional, timing }: Models): string[] {
  const names = cell.pins.map(({ name }) => name);
  const separator = names.length === 0 ? '' : ', ';
  return [
    '`celldefine',
    `(* family = "${cell.family}", area = ${areaOf(cell)} *)`,
    `module ${cell.name} (`,
    ...(names.length === 0 ? [] : [`  ${names.join(', ')}`]),
    '`ifdef USE_POWER_PINS',
    `  ${separator}vdd, vss`,
    '`endif',
    ');',
    ...cell.pins.map(declaration),
    '`ifdef USE_POWER_PINS',
    '  inout vdd, vss;',
    '`endif',
    ...choice(functional, timing),
    'endmodule',
    '`endcelldefine',
    '',
  ];
}

function choice(functional: readonly string[], timing: readonly string[]): string[] {
  if (functional.length + timing.length === 0) return [];
  const indented = (lines: readonly string[]) => lines.map((line) => `  ${line}`);
  return [
    ...['`ifdef HOBNAIL_FUNCTIONAL', ...indented(functional)],
    ...['`else', ...indented(timing), '`endif'],
  ];
}

function declaration({ name, direction, width }: Pin): string {
  return `  ${direction} ${width === 1 ? '' : `[${width - 1}:0] `}${name};`;
}

/** Lines between `specify` and `endspecify`; none without paths or checks. */
export function specify(lines: readonly string[]): string[] {
  if (lines.length === 0) return [];
  return ['specify', ...lines.map((line) => `  ${line}`), 'endspecify'];
}

/** The models of a cell without state. */
export function logicModels(cell: LogicCell): Models {
  const gates = cell.functions.map(({ pin, is }) =>
    cell.isPrimitive ? { wires: [], lines: [primitiveInstance(cell, pin)] } : gatesFor(pin, is),
  );
  const wires = gates.flatMap((each) => each.wires);
  return {
    functional: cell.functions.map(({ pin, is }) => `assign ${pin} = ${assigned(is)};`),
    timing: [
      ...(wires.length === 0 ? [] : [`wire ${wires.join(', ')};`]),
      ...gates.flatMap((each) => each.lines),
      ...specify(cell.functions.flatMap(({ pin, is }) => logicPaths(cell, pin, is))),
    ],
  };
}

function primitiveInstance(cell: LogicCell, output: string): string {
  const terminals = [output, ...pinNames(cell, 'input')];
  return `${primitiveName(cell.family)} (${terminals.join(', ')});`;
}

/** The models of a cell whose output can be z. */
export function triStateModels({ is, enable }: TriStateCell): Models {
  const inverts = Array.isArray(is) && is[0] === 'not';
  const level = enable === 'en' ? 1 : 0;
  const value = inverts ? '~a' : 'a';
  return {
    functional: [`assign y = ${enable} == 1'b${level} ? ${value} : 1'bz;`],
    timing: [
      `${inverts ? 'notif' : 'bufif'}${level} (y, a, ${enable});`,
      ...specify([
        `(a ${inverts ? '-' : '+'}=> y) = (0.050, 0.060);`,
        `(${enable} => y) = (0.050, 0.060, 0.070, 0.050, 0.060, 0.070);`,
      ]),
    ],
  };
}

/** The models of a cell without logic. */
export const noModels: Models = { functional: [], timing: [] };
