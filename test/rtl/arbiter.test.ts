import { describe, expect, it } from 'vitest';
import {
  expectModel,
  type Model,
  onEveryEngine,
  randomInputs,
  rtlDesign,
  type Values,
} from './circuits.js';

const sizes = [1, 2, 3, 5];
const styles = ['RING', 'DOUBLE', 'SCAN'];
const arbiters = sizes.flatMap((n) => styles.map((style) => ({ n, style, port: `${style}_${n}` })));

const everyArbiter = rtlDesign(
  ['arbiter.v'],
  `module every (input clk, rst_n, input [4:0] request,
     ${arbiters.map(({ n, port }) => `output [${n - 1}:0] ${port}`).join(', ')});
     ${arbiters
       .map(
         ({ n, style, port }) =>
           `arbiter #(.N(${n}), .STYLE("${style}")) a_${port} (clk, rst_n, request[${n - 1}:0], ${port});`,
       )
       .join('\n     ')}
   endmodule`,
  'every',
);

/** Owner and turn of one arbiter with `n` masters. */
function roundRobin(n: number) {
  let owner = -1;
  let turn = 0;
  return (request: number, isReset: boolean): number => {
    if (isReset) [owner, turn] = [-1, 0];
    const grant = owner < 0 ? 0 : 1 << owner;
    if (!isReset && !(grant & request)) {
      const order = Array.from({ length: n }, (_, i) => (turn + i) % n);
      owner = order.find((master) => (request >> master) & 1) ?? -1;
      if (owner >= 0) turn = (owner + 1) % n;
    }
    return grant;
  };
}

const model = (): Model => {
  const each = arbiters.map(({ n, port }) => ({ port, step: roundRobin(n) }));
  return ({ rst_n, request }) =>
    Object.fromEntries(each.map(({ port, step }) => [port, step(request!, !rst_n)]));
};

describe('the arbiter', () => {
  it('grants in turn, in all styles and sizes', async () => {
    const rows = randomInputs(everyArbiter, 4, 800, ({ request }, chance, cycle) => ({
      rst_n: cycle === 0 || chance(200) ? 0 : 1,
      request: chance(3) ? request! : request! & 0b10110,
    }));
    await expectModel(everyArbiter, model, rows);
  });

  it('lets everyone who asks have the bus after at most n - 1 others', async () => {
    const rows: Values[] = Array.from({ length: 41 }, (_, cycle) => ({
      rst_n: cycle > 0 ? 1 : 0,
      // All ask, and let go every other cycle.
      request: cycle % 2 === 1 ? 0b11111 : 0,
    }));
    await onEveryEngine(everyArbiter, rows, (read) => {
      for (const { n, port } of arbiters) {
        const owners = Array.from({ length: n }, (_, i) => read(port, 2 + 2 * i));
        expect(owners).toEqual(Array.from({ length: n }, (_, i) => 1 << i));
      }
    });
  });
});

describe('the bus', () => {
  it('carries the data of whoever has it, by and-or and by drivers that let go', async () => {
    const design = rtlDesign(
      ['arbiter.v'],
      `module system (input clk, rst_n, input [2:0] request, input [26:0] data,
                      output [2:0] grant, output [8:0] bus, shared);
         arbiter #(3) who (clk, rst_n, request, grant);
         bus_mux #(.N(3), .W(9)) what (.grant(grant), .data(data), .bus(bus));
         bus_drivers #(3, 9) same (grant, data, shared);
       endmodule`,
    );
    const system = (): Model => {
      const step = roundRobin(3);
      return ({ rst_n, request, data }) => {
        const grant = step(request!, !rst_n);
        const owner = Math.log2(grant);
        if (grant === 0) return { grant, bus: 0 };
        const bus = (data! >> (9 * owner)) & 511;
        return { grant, bus, shared: bus };
      };
    };
    const rows = randomInputs(design, 5, 500, (_, chance, cycle) => ({
      rst_n: cycle === 0 || chance(50) ? 0 : 1,
    }));
    await expectModel(design, system, rows);
  });
});
