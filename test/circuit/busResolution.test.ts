import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { NetType, PartKind, packTraits, Strength } from '../../compiler/circuit/busParts.js';
import { resolveBuses } from '../../compiler/circuit/busResolution.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind, gateInfo, isGate } from '../../compiler/circuit/gates.js';
import { type NetId, NO_NET } from '../../compiler/circuit/ids.js';
import { evaluate } from '../read/verilog/elaborate/reading.js';
import { type ModelDriver, modelConflict, modelFloats, modelValue } from './busModel.js';

const seed = 20261201;
const X = 2;
const values = [0, 1, X];

/** A driver as it is built: with a pin of its own for its data, and for its enable unless steady. */
interface Shape {
  readonly isSteady: boolean;
  readonly zero: Strength;
  readonly one: Strength;
}

const strong: Shape = { isSteady: false, zero: Strength.Strong, one: Strength.Strong };
const gate: Shape = { ...strong, isSteady: true };
const openDrain: Shape = { ...gate, one: Strength.HighZ };
const openSource: Shape = { ...strong, zero: Strength.HighZ };
const pull: Shape = { isSteady: false, zero: Strength.Pull, one: Strength.Pull };
const weak: Shape = { isSteady: true, zero: Strength.Weak, one: Strength.Weak };
const mixed: Shape = { isSteady: false, zero: Strength.Strong, one: Strength.Pull };
const supply: Shape = { isSteady: false, zero: Strength.Supply, one: Strength.Supply };
const shapes = [strong, gate, openDrain, openSource, pull, weak, mixed, supply];

/** A circuit with one bus, which an output port reads. */
class BusBench {
  readonly circuit: Circuit;
  readonly bus: NetId;
  readonly #pins: { readonly data: NetId; readonly enable: NetId }[] = [];

  constructor(type: NetType, drivers: readonly Shape[]) {
    const builder = new CircuitBuilder();
    this.bus = builder.net();
    builder.output('bus', [this.bus]);
    if (type !== NetType.Plain) builder.setNetType(this.bus, type);
    for (const [i, { isSteady, zero, one }] of drivers.entries()) {
      const data = builder.net();
      const enable = isSteady ? NO_NET : builder.net();
      builder.input(`d${i}`, [data]);
      if (!isSteady) builder.input(`e${i}`, [enable]);
      this.#pins.push({ data, enable });
      if (isSteady && zero === Strength.Strong && one === Strength.Strong) {
        builder.drive(this.bus, GateKind.Buf, [data]);
      } else {
        const traits = packTraits({ kind: PartKind.Driver, zero, one });
        builder.busPart(this.bus, data, enable, traits);
      }
    }
    expect(resolveBuses(builder)).toEqual([]);
    this.circuit = builder.finish('t');
  }

  /** The value of a net for the values of all pins. */
  value(net: number, drivers: readonly ModelDriver[]): number {
    const known = new Map<number, number>();
    for (const [i, { data, enable }] of this.#pins.entries()) {
      known.set(data, drivers[i]!.data);
      if (enable !== NO_NET) known.set(enable, drivers[i]!.enable);
    }
    return evaluate(this.circuit, net, known);
  }

  check(kind: 'conflict' | 'float'): number | undefined {
    return this.circuit.checks.find((check) => check.kind === kind)?.when;
  }

  get gates(): string {
    const kinds = [...this.circuit.kind].filter(isGate);
    return kinds
      .map((kind) => gateInfo(kind).name)
      .sort()
      .join(' ');
  }
}

/** All values of the pins of some drivers. */
function allPins(drivers: readonly Shape[], choices: readonly number[]): ModelDriver[][] {
  let all: ModelDriver[][] = [[]];
  for (const { isSteady, zero, one } of drivers) {
    const own = choices.flatMap((data) =>
      (isSteady ? [1] : choices).map((enable) => ({ data, enable, zero, one })),
    );
    all = all.flatMap((before) => own.map((each) => [...before, each]));
  }
  return all;
}

const typeDriver: Partial<Record<NetType, ModelDriver>> = {
  [NetType.Pull0]: { data: 0, enable: 1, zero: Strength.Pull, one: Strength.Pull },
  [NetType.Pull1]: { data: 1, enable: 1, zero: Strength.Pull, one: Strength.Pull },
};

const withType = (type: NetType, drivers: readonly ModelDriver[]): readonly ModelDriver[] => {
  const own = typeDriver[type];
  return own === undefined ? drivers : [...drivers, own];
};

// One gate at most on a net that is not wired.
const isAllowed = (type: NetType, drivers: readonly Shape[]): boolean =>
  type === NetType.And || type === NetType.Or || drivers.filter((each) => each === gate).length < 2;

/** The value loads read by the tables of two drivers, written `0 1 x z` both ways. */
const wireTable = ['0 x x 0', 'x 1 x 1', 'x x x x', '0 1 x x'];
const andTable = ['0 0 0 0', '0 1 x 1', '0 x x x', '0 1 x x'];
const orTable = ['0 1 x 0', '1 1 1 1', 'x 1 x x', '0 1 x x'];

describe('resolveBuses', () => {
  // IEEE 1364-2005, clause 4.6: tables 4-2 to 4-4, where loads read x for their z.
  it.each([
    ['wire and tri', NetType.Plain, wireTable],
    ['wand and triand', NetType.And, andTable],
    ['wor and trior', NetType.Or, orTable],
  ])('follows the table of %s', (_, type, table) => {
    const bench = new BusBench(type, [strong, strong]);
    const driver = (symbol: string): ModelDriver => ({
      ...strong,
      data: symbol === 'z' ? 0 : '01x'.indexOf(symbol),
      enable: symbol === 'z' ? 0 : 1,
    });
    const found = [...'01xz'].map((a) =>
      [...'01xz'].map((b) => '01x'[bench.value(bench.bus, [driver(a), driver(b)])]).join(' '),
    );
    expect(found).toEqual(table);
  });

  // Clause 4.6.5: tables 4-5 and 4-6 give the pull where both drivers are z.
  it.each([
    ['tri0', NetType.Pull0, 0],
    ['tri1', NetType.Pull1, 1],
  ])('gives %s its pull where nothing drives', (_, type, value) => {
    const bench = new BusBench(type, [strong, strong]);
    const off = { ...strong, data: X, enable: 0 };
    expect(bench.value(bench.bus, [off, off])).toBe(value);
    expect(bench.check('float')).toBe(undefined);
  });

  it('agrees with the standard for one and two drivers of all shapes and values', () => {
    for (const type of [NetType.Plain, NetType.And, NetType.Or, NetType.Pull0, NetType.Pull1]) {
      for (const a of shapes) {
        for (const b of [undefined, ...shapes]) {
          const drivers = b === undefined ? [a] : [a, b];
          if (isAllowed(type, drivers)) agrees(type, drivers);
        }
      }
    }
  });

  it('agrees with the standard for several drivers', () => {
    const types = fc.constantFrom(...Object.values(NetType).slice(0, NetType.Charge));
    const many = fc.array(fc.constantFrom(...shapes), { minLength: 3, maxLength: 4 });
    fc.assert(
      fc.property(types, many, (type, drivers) => {
        fc.pre(isAllowed(type, drivers));
        agrees(type, drivers);
      }),
      { seed, numRuns: 60 },
    );
  });

  /** Compares with the model; an x where the standard has a value is allowed where `isLoose`. */
  function agrees(type: NetType, drivers: readonly Shape[]): void {
    const bench = new BusBench(type, drivers);
    for (const pins of allPins(drivers, values)) {
      const all = withType(type, pins);
      const actual = bench.value(bench.bus, pins);
      const expected = modelValue(type, all);
      if (actual === X && isLoose(pins)) continue;
      if (actual !== expected)
        expect({ type, pins, value: actual }).toEqual({ type, pins, value: expected });
    }
    for (const pins of allPins(drivers, [0, 1])) checksAgree(bench, type, pins);
  }

  // A driver with an x that drives its values with two strengths appears on two levels.
  const isLoose = (pins: readonly ModelDriver[]): boolean =>
    pins.some(({ data, enable, zero, one }) => zero !== one && (data === X || enable === X));

  function checksAgree(bench: BusBench, type: NetType, pins: readonly ModelDriver[]): void {
    const all = withType(type, pins);
    const read = (kind: 'conflict' | 'float'): boolean => {
      const when = bench.check(kind);
      return when !== undefined && bench.value(when, pins) === 1;
    };
    const isWired = type === NetType.And || type === NetType.Or;
    expect(read('conflict')).toBe(!isWired && modelConflict(all));
    expect(read('float')).toBe(modelFloats(all));
  }

  it('needs one multiplexer for a single driver', () => {
    expect(new BusBench(NetType.Plain, [strong]).gates).toBe('mux not');
    expect(new BusBench(NetType.Pull0, [strong]).gates).toBe('and');
    expect(new BusBench(NetType.And, [gate, gate]).gates).toBe('and buf buf');
    expect(new BusBench(NetType.Plain, [gate, weak]).gates).toBe('buf');
  });
});
