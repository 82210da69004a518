import { describe, expect, it } from 'vitest';
import { netName, primaryNames } from '../../compiler/circuit/hierarchy.js';
import { clockPins } from '../../compiler/circuit/memoryPorts.js';
import { waveDepths } from '../../compiler/circuit/waveDepths.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';

/** The last waves of the registers named, while the clock is at 1. */
function depthsOf(items: string): Record<string, number> {
  const text = `module m(input clk, input d, input e, output q); ${items} endmodule`;
  const circuit = readNetlist([new Source('m.v', text)], {}, new Diagnostics())!;
  const clock = circuit.inputs.find(({ name }) => name === 'clk')!.nets[0];
  const depths = waveDepths(circuit, (net) => (net === clock ? 1 : undefined));
  expect(depths).toHaveLength(clockPins(circuit).clock.length);
  const names = primaryNames(circuit.hierarchy, circuit.netCount);
  const found: Record<string, number> = {};
  for (const [register, net] of circuit.registers.output.entries()) {
    found[netName(circuit.hierarchy, names, net)] = depths[register]!;
  }
  return found;
}

describe('waveDepths', () => {
  it('lets a pin on a clock port move with the clock alone', () => {
    expect(depthsOf('reg r; always @(posedge clk) r <= d; assign q = r;')).toEqual({ r: 0 });
  });

  it('sees through a gate whose latch is closed, though a register opens it', () => {
    const gate = `reg on, r, open;
      always @(posedge clk) on <= e;
      always @* if (!clk) open = on;
      wire c = clk & open;
      always @(posedge c) r <= d;
      assign q = r;`;
    expect(depthsOf(gate)).toEqual({ on: 0, r: 0 });
  });

  it('counts the registers of a ripple counter', () => {
    const ripple = `reg a, b, c;
      always @(posedge clk) a <= ~a;
      always @(posedge a) b <= ~b;
      always @(posedge b) c <= ~c;
      assign q = c;`;
    expect(depthsOf(ripple)).toEqual({ a: 0, b: 1, c: 2 });
  });

  it('passes over latches that are open', () => {
    const through = `reg a, b, l;
      always @(posedge clk) a <= ~a;
      always @* if (clk) l = a;
      always @(posedge l) b <= d;
      assign q = b;`;
    expect(depthsOf(through)).toEqual({ a: 0, b: 1 });
  });

  it('finds no end where a register clocks itself', () => {
    const ring = `reg a; wire c = a ^ clk; always @(posedge c) a <= ~a; assign q = a;`;
    expect(depthsOf(ring)).toEqual({ a: Number.POSITIVE_INFINITY });
  });
});
