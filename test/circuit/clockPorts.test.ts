import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { Edge } from '../../compiler/circuit/circuit.js';
import { isClockName } from '../../compiler/circuit/clockNames.js';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { type SmallCircuit, smallCircuit } from '../support/smallCircuit.js';

const find = (spec: Partial<SmallCircuit>, named?: readonly string[]) =>
  findClockPorts(smallCircuit({ inputs: [], outputs: [], ...spec }), named);

const names = (spec: Partial<SmallCircuit>) => find(spec).ports.map((port) => port.name);

describe('a clock', () => {
  it('is an input that reaches a clock pin, whatever its name', () => {
    expect(
      names({ inputs: ['tick', 'clk'], registers: { q: { clock: 'tick', data: 'clk' } } }),
    ).toEqual(['tick']);
  });

  it('is found through buffers, inverters and gates of one input', () => {
    const found = find({
      inputs: ['t'],
      registers: { q: { clock: 'c', data: 'q' } },
      gates: { a: 'buf t', b: 'not a', c: 'nand b' },
    });
    expect(found.ports).toMatchObject([{ name: 't', inactive: 0 }]);
  });

  it('leaves the enable of a gated clock as data', () => {
    const spec: Partial<SmallCircuit> = {
      inputs: ['ck_en', 'ck'],
      registers: { q: { clock: 'g', data: 'q' } },
      gates: { g: 'and ck ck_en' },
    };
    expect(names(spec)).toEqual(['ck']);
    expect(find(spec).gating).toEqual(['ck_en']);
    expect(find(spec).ambiguous).toEqual([]);
  });

  it('is known by the register that it clocks directly, also where it is gated elsewhere', () => {
    expect(
      names({
        inputs: ['p', 'en'],
        registers: { q: { clock: 'p', data: 'q' }, r: { clock: 'g', data: 'r' } },
        gates: { g: 'or p en' },
      }),
    ).toEqual(['p']);
  });

  it('is known by the latch of a gating cell where nothing is clocked directly', () => {
    expect(
      names({
        inputs: ['en', 'p'],
        registers: { q: { clock: 'g', data: 'q' } },
        latches: { open: { enable: 'low', data: 'en' } },
        gates: { low: 'not p', g: 'and p open' },
      }),
    ).toEqual(['p']);
  });

  it('is not the load of a data latch that also gates', () => {
    expect(
      names({
        inputs: ['load', 'clk'],
        registers: { q: { clock: 'g', data: 'l' } },
        latches: { l: { enable: 'load', data: 'q' } },
        gates: { g: 'and clk load' },
      }),
    ).toEqual(['clk']);
  });

  it('may come twice: both inputs of a clock multiplexer, but not its select', () => {
    const spec: Partial<SmallCircuit> = {
      inputs: ['sel', 'clkA', 'clkB'],
      registers: { q: { clock: 'g', data: 'q' } },
      gates: { g: 'mux sel clkA clkB' },
    };
    expect(names(spec)).toEqual(['clkA', 'clkB']);
  });

  it('is both inputs where no name decides, and these are reported', () => {
    const found = find({
      inputs: ['a', 'b'],
      registers: { q: { clock: 'g', data: 'q' } },
      gates: { g: 'xor a b' },
    });
    expect(found.ports.map((port) => port.name)).toEqual(['a', 'b']);
    expect(found.ambiguous).toEqual(['a', 'b']);
  });

  it('is not searched for behind a register that divides', () => {
    const found = find({
      inputs: ['t', 'hold'],
      registers: { half: { clock: 't', data: 'n' }, q: { clock: 'g', data: 'q' } },
      gates: { n: 'not half', g: 'and half hold' },
    });
    expect(found.ports.map((port) => port.name)).toEqual(['t']);
    expect(found.gating).toEqual(['hold']);
  });

  it('may be a bit of a vector', () => {
    expect(
      names({ inputs: ['v[2:0]'], registers: { q: { clock: 'v[1]', data: 'v[0]' } } }),
    ).toEqual(['v[1]']);
  });

  it('enables latches in a circuit without registers if its name says so', () => {
    const latches = { q: { enable: 'e', data: 'd' }, r: { enable: 'phi1', data: 'q' } };
    expect(names({ inputs: ['e', 'phi1', 'd'], latches })).toEqual(['phi1']);
  });

  it('may be an input net that is in no port', () => {
    const builder = new CircuitBuilder();
    const clock = builder.net();
    builder.input('', [clock]);
    const output = builder.net();
    builder.register({ output, clock, data: output });
    const circuit = { ...builder.finish('top'), inputs: [] };
    expect(circuit.kind[clock]).toBe(GateKind.Input);
    expect(findClockPorts(circuit).ports).toEqual([{ name: 'clock', net: clock, inactive: 0 }]);
  });

  it('is whatever the caller names', () => {
    const spec: Partial<SmallCircuit> = {
      inputs: ['a', 'v[1:0]', 'c'],
      registers: { q: { clock: 'a', data: 'c' } },
    };
    expect(find(spec, ['v[0]', 'a']).ports.map((port) => port.name)).toEqual(['a', 'v[0]']);
    expect(() => find(spec, ['v'])).toThrow('no input bit is named v; got a, v[0], v[1], c');
  });

  it('is none in a circuit of gates alone', () => {
    expect(find({ inputs: ['clk', 'a'], gates: { y: 'and clk a' } }).ports).toEqual([]);
  });

  it('does not hang on rings in front of a clock pin', () => {
    expect(
      names({
        inputs: ['clk'],
        registers: { q: { clock: 'r1', data: 'q' }, p: { clock: 'g', data: 'p' } },
        gates: { r1: 'buf r2', r2: 'not r1', g: 'and clk f', f: 'or g f' },
      }),
    ).toEqual(['clk']);
  });
});

describe('the inactive level', () => {
  const levels = (spec: Partial<SmallCircuit>) =>
    find({ inputs: ['clk', 'd'], ...spec }).ports.map((port) => port.inactive);

  it('is 0 for a rising edge and 1 where all registers capture on the falling one', () => {
    const falling = { clock: 'clk', data: 'd', edge: Edge.Falling };
    expect(levels({ registers: { q: { clock: 'clk', data: 'd' } } })).toEqual([0]);
    expect(levels({ registers: { q: falling, r: falling } })).toEqual([1]);
    expect(levels({ registers: { q: falling, r: { clock: 'clk', data: 'd' } } })).toEqual([0]);
  });

  it('counts inverters between the port and the pin', () => {
    const gates = { low: 'not clk' };
    const edge = Edge.Falling;
    expect(levels({ gates, registers: { q: { clock: 'low', data: 'd' } } })).toEqual([1]);
    expect(levels({ gates, registers: { q: { clock: 'low', data: 'd', edge } } })).toEqual([0]);
  });

  it('counts a latch by the edge at which it closes', () => {
    const q = { clock: 'clk', data: 'd', edge: Edge.Falling };
    expect(levels({ registers: { q }, latches: { l: { enable: 'clk', data: 'd' } } })).toEqual([1]);
    expect(
      levels({
        registers: { q },
        latches: { l: { enable: 'low', data: 'd' } },
        gates: { low: 'not clk' },
      }),
    ).toEqual([0]);
  });

  it('is 0 for a clock that reaches no pin directly', () => {
    const registers = { q: { clock: 'g', data: 'd', edge: Edge.Falling } };
    expect(levels({ registers, gates: { g: 'and clk d' } })).toEqual([0]);
  });
});

describe('isClockName', () => {
  it('finds the usual words in any case and place', () => {
    for (const name of [
      'clk',
      'CK',
      'sys_clk',
      'clkIn',
      'fastClock',
      'CP2',
      'phi1',
      'cpn',
      'phiX',
      'in_clk[3]',
    ]) {
      expect(isClockName(name), name).toBe(true);
    }
  });

  it('finds none in names that merely contain the letters or that steer a clock', () => {
    for (const name of [
      'tick',
      'check',
      'clk_en',
      'clken',
      'clockEnable',
      'clk_sel',
      'copy',
      'd',
    ]) {
      expect(isClockName(name), name).toBe(false);
    }
  });
});
