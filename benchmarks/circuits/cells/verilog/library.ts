import { type Cell, libraryName, pinNames } from '../cell.js';
import { truthTable } from '../expression.js';
import { cells } from '../library.js';
import { cellModule, logicModels, type Models, noModels, triStateModels } from './modules.js';
import { logicPrimitive, type Primitive } from './primitives.js';
import {
  flopModels,
  gateLatch,
  gateModels,
  latchModels,
  primitiveOfFlop,
  primitiveOfLatch,
} from './stateModules.js';

/** The file of the cells, and the file of the primitives that it includes. */
export const verilogFile = `${libraryName}.v`;
export const primitivesFile = `${libraryName}_primitives.v`;

const macros = `// USE_POWER_PINS gives every cell the pins vdd and vss; HOBNAIL_FUNCTIONAL takes models without
// primitives, delays and timing checks.`;

/** The cells as Verilog (IEEE 1364-2005) modules, in chunks of whole lines. */
export function* verilogLibrary(): Generator<string> {
  yield `// ${libraryName}: ${cells.length} cells.\n${macros}\n`;
  yield '`ifndef HOBNAIL_CELLS\n`define HOBNAIL_CELLS\n';
  yield '`timescale 1ns / 1ps\n`default_nettype none\n';
  yield `\`ifndef HOBNAIL_FUNCTIONAL\n\`include "${primitivesFile}"\n\`endif\n\n`;
  for (const cell of cells) yield `${cellModule(cell, modelsOf(cell)).join('\n')}\n`;
  yield '`default_nettype wire\n`endif\n';
}

/** The primitives of the cells, each once. */
export function* verilogPrimitives(): Generator<string> {
  yield `// The primitives of ${verilogFile}.\n\n`;
  const seen = new Set<string>();
  for (const { name, lines } of cells.flatMap(primitivesOf)) {
    if (seen.has(name)) continue;
    seen.add(name);
    yield `${lines.join('\n')}\n`;
  }
}

function modelsOf(cell: Cell): Models {
  switch (cell.kind) {
    case 'logic':
      return logicModels(cell);
    case 'triState':
      return triStateModels(cell);
    case 'flop':
      return flopModels(cell);
    case 'latch':
      return latchModels(cell);
    case 'clockGate':
      return gateModels(cell);
    case 'physical':
      return noModels;
  }
}

function primitivesOf(cell: Cell): Primitive[] {
  switch (cell.kind) {
    case 'logic': {
      if (!cell.isPrimitive) return [];
      const pins = pinNames(cell, 'input');
      return cell.functions.map(({ is }) =>
        logicPrimitive(cell.family, pins, truthTable(is, pins)),
      );
    }
    case 'flop':
      return [primitiveOfFlop(cell)];
    case 'latch':
      return [primitiveOfLatch(cell)];
    case 'clockGate':
      return cell.hasLatch ? [gateLatch] : [];
    default:
      return [];
  }
}
