import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { Edge, Priority } from '../../../../compiler/circuit/circuit.js';
import { NO_NET } from '../../../../compiler/circuit/ids.js';
import { Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../../compiler/diagnostics/sourceMap.js';
import { PrimitiveTable } from '../../../../compiler/read/verilog/elaborate/primitiveTable.js';
import { parseVerilog } from '../../../../compiler/read/verilog/parse.js';
import { circuitOf, evaluate } from './reading.js';

const tables = {
  'a flip-flop': 'r 0:?:0; r 1:?:1; f ?:?:-; ? *:?:-;',
  'a flip-flop on the falling edge': 'n 0:?:0; n 1:?:1; p ?:?:-; ? *:?:-;',
  'a flip-flop with enable': 'r 1 0:?:0; r 1 1:?:1; r 0 ?:?:-; n ? ?:?:-; ? * ?:?:-; ? ? *:?:-;',
  'a toggle': 'r 1:0:1; r 1:1:0; r 0:?:-; f ?:?:-; ? *:?:-;',
  'a flip-flop of J and K':
    'r 0 0:?:-; r 0 1:?:0; r 1 0:?:1; r 1 1:0:1; r 1 1:1:0; f ? ?:?:-; ? * ?:?:-; ? ? *:?:-;',
  'a flip-flop with scan':
    'r 0 ? 0:?:0; r 1 ? 0:?:1; r ? 0 1:?:0; r ? 1 1:?:1; n ? ? ?:?:-; ? * ? ?:?:-; ? ? * ?:?:-; ? ? ? *:?:-;',
  'a flip-flop with set and reset':
    '? ? 0 ?:?:0; ? ? 1 0:?:1; p 0 1 1:?:0; p 1 1 1:?:1; n ? 1 1:?:-; ? * 1 1:?:-; ? ? p 1:?:-; ? ? 1 p:?:-;',
  'a flip-flop with synchronous reset':
    'r ? 1:?:0; r 0 0:?:0; r 1 0:?:1; f ? ?:?:-; ? * ?:?:-; ? ? *:?:-;',
  'a latch': '1 0:?:0; 1 1:?:1; 0 ?:?:-;',
  'a latch with reset': '? ? 1:?:0; 0 0 0:?:0; 0 1 0:?:1; 1 ? 0:?:-;',
  'a latch with two enables': '1 1 0:?:0; 1 1 1:?:1; 0 ? ?:?:-; ? 0 ?:?:-;',
  'a latch of set and reset': '1 0:?:1; ? 1:?:0; 0 0:?:-;',
} as const;

/** The table of a primitive p with inputs i0, i1, …, and the circuit of one instance of it. */
function built(rows: string): { table: PrimitiveTable; circuit: Circuit } {
  const count = rows.split(':')[0]!.trim().split(/\s+/).length;
  const inputs = Array.from({ length: count }, (_, i) => `i${i}`).join(', ');
  const text = `primitive p (q, ${inputs}); output q; reg q; input ${inputs};
      table ${rows} endtable
    endprimitive
    module t (output q, input ${inputs}); p (q, ${inputs}); endmodule`;
  const { primitives } = parseVerilog(
    [new Source('t.v', text)],
    {},
    new SourceMap(),
    new Diagnostics(),
  );
  return { table: new PrimitiveTable(primitives[0]!.rows, count), circuit: circuitOf(text) };
}

/** What the register or latch of a circuit does when one input changes. */
class StateModel {
  readonly #circuit: Circuit;

  constructor(circuit: Circuit) {
    this.#circuit = circuit;
  }

  /** Whether the state can last at these levels. */
  lasts(levels: number, state: number): boolean {
    return this.#settled(levels, state) === state;
  }

  next(input: number, levels: number, state: number): number {
    const { registers } = this.#circuit;
    if (registers.count === 0) return this.#settled(levels, state);
    const port = this.#circuit.inputs[input]!.nets[0];
    const rises = (levels >> input) & 1;
    const captures =
      port === registers.clock[0] && rises === (registers.edge[0] === Edge.Rising ? 1 : 0);
    const captured = captures ? this.#value(registers.data[0]!, levels, state) : state;
    return this.#settled(levels, captured);
  }

  #settled(levels: number, state: number): number {
    const { registers, latches } = this.#circuit;
    const { set, reset, priority } = registers.count > 0 ? registers : latches;
    const isSet = this.#value(set[0]!, levels, state) === 1;
    const isReset = this.#value(reset[0]!, levels, state) === 1;
    if (isSet && isReset) {
      expect(priority[0]).not.toBe(Priority.Unknown);
      return priority[0] === Priority.SetWins ? 1 : 0;
    }
    if (isSet || isReset) return isSet ? 1 : 0;
    if (registers.count > 0 || this.#value(latches.enable[0]!, levels, state) !== 1) return state;
    return this.#value(latches.data[0]!, levels, state);
  }

  #value(net: number, levels: number, state: number): number {
    if (net === NO_NET) return 0;
    const { inputs, registers, latches } = this.#circuit;
    const known = new Map(inputs.map(({ nets }, input) => [nets[0]!, (levels >> input) & 1]));
    for (const each of [registers, latches])
      for (const output of each.output) known.set(output, state);
    return evaluate(this.#circuit, net, known);
  }
}

describe('a sequential primitive', () => {
  it.each(Object.entries(tables))('that is %s does what its table says', (_, rows) => {
    const { table, circuit } = built(rows);
    const model = new StateModel(circuit);
    expect(circuit.registers.count + circuit.latches.count).toBe(1);
    for (let before = 0; before < 1 << table.inputs; before++) {
      for (const state of [0, 1]) {
        if (!model.lasts(before, state)) continue;
        for (let input = 0; input < table.inputs; input++) {
          const levels = before ^ (1 << input);
          const outcome = table.event(input, levels, state);
          const wanted = outcome === '-' ? state : Number(outcome);
          expect(model.next(input, levels, state)).toBe(wanted);
        }
      }
    }
  });
});
