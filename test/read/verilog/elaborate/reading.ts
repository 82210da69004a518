import { expect } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { GateKind, gateInfo, isGate } from '../../../../compiler/circuit/gates.js';
import { scopePath } from '../../../../compiler/circuit/hierarchy.js';
import { Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../../compiler/diagnostics/sourceMap.js';
import { elaborate } from '../../../../compiler/read/verilog/elaborate/elaborate.js';
import { parseVerilog } from '../../../../compiler/read/verilog/parse.js';

export interface Reading {
  readonly circuit: Circuit | undefined;
  readonly diagnostics: Diagnostics;
  /** For each diagnostic its code, the text under its span and the line of that. */
  readonly problems: readonly string[];
}

/** Reads a Verilog text and elaborates it. */
export function reading(text: string, top?: string): Reading {
  const sources = new SourceMap();
  const diagnostics = new Diagnostics();
  const syntax = parseVerilog([new Source('t.v', text)], {}, sources, diagnostics);
  const circuit = elaborate(syntax, top === undefined ? {} : { top }, sources, diagnostics);
  const problems = diagnostics.list.map(({ code, span }) => {
    if (span === undefined) return code;
    const { line } = span.source.place(span.start);
    return `${code} ${span.source.slice(span.start, span.end)}@${line}`;
  });
  return { circuit, diagnostics, problems };
}

/** The circuit of a text that has nothing wrong with it. */
export function circuitOf(text: string, top?: string): Circuit {
  const { circuit, diagnostics } = reading(text, top);
  expect(diagnostics.list.map(({ code, message }) => `${code}: ${message}`)).toEqual([]);
  return circuit!;
}

/** The nets of a signal by its dotted path, least significant first. */
export function netsOf(circuit: Circuit, path: string): number[] {
  const { hierarchy } = circuit;
  for (let scope = 0; scope < hierarchy.scopeNames.length; scope++) {
    const prefix = scopePath(hierarchy, scope);
    for (const signal of hierarchy.modules[hierarchy.scopeModule[scope]!]!.signals) {
      if ((prefix === '' ? signal.name : `${prefix}.${signal.name}`) !== path) continue;
      const start = hierarchy.scopeStart[scope]! + signal.offset;
      return [...hierarchy.netOf.slice(start, start + signal.width)];
    }
  }
  throw new RangeError(`no signal ${path} among the names of the circuit`);
}

/** Paths of all scopes below the top. */
export function scopesOf({ hierarchy }: Circuit): string[] {
  return Array.from(hierarchy.scopeNames, (_, scope) => scopePath(hierarchy, scope)).slice(1);
}

/** Names of the kinds of all gates, sorted. */
export function gatesOf(circuit: Circuit): string[] {
  return [...circuit.kind]
    .filter(isGate)
    .map((kind) => gateInfo(kind).name)
    .sort();
}

/** `name[width]` of ports, or the name alone for a scalar. */
export function portsOf(ports: Circuit['inputs']): string[] {
  return ports.map(({ name, msb, lsb, isVector }) => (isVector ? `${name}[${msb}:${lsb}]` : name));
}

/**
 * The value of a signal, or x where a bit is unknown, with given values of inputs and of states by
 * net; what is not given is 0. The logic must have no loop.
 */
export function signalValue(
  circuit: Circuit,
  path: string,
  inputs: Readonly<Record<string, number>>,
  states: ReadonlyMap<number, number> = new Map(),
): number | 'x' {
  const known = new Map(states);
  for (const { name, nets } of circuit.inputs) {
    nets.forEach((net, bit) => {
      known.set(net, ((inputs[name] ?? 0) >> bit) & 1);
    });
  }
  const bits = netsOf(circuit, path).map((net) => evaluate(circuit, net, known));
  if (bits.includes(2)) return 'x';
  return bits.reduce((sum, bit, place) => sum + bit * 2 ** place, 0);
}

/** The value of a net: 0, 1 or 2 for x. */
export function evaluate(circuit: Circuit, net: number, known: Map<number, number>): number {
  const given = known.get(net);
  if (given !== undefined) return given;
  const kind = circuit.kind[net]!;
  const fanin = circuit.fanin.slice(circuit.faninStart[net]!, circuit.faninStart[net + 1]!);
  const value = isGate(kind)
    ? apply(
        kind,
        [...fanin].map((source) => evaluate(circuit, source, known)),
      )
    : kind === GateKind.One
      ? 1
      : kind === GateKind.Unknown
        ? 2
        : 0;
  known.set(net, value);
  return value;
}

function apply(kind: number, values: readonly number[]): number {
  if (kind === GateKind.Mux) {
    const [select, zero, one] = values;
    if (select === 2) return zero === one ? zero! : 2;
    return select === 0 ? zero! : one!;
  }
  const { operation, inverted } = gateInfo(kind).fold!;
  const value =
    operation === 'xor'
      ? values.includes(2)
        ? 2
        : values.reduce((sum, each) => sum ^ each, 0)
      : fold(values, operation === 'and' ? 0 : 1);
  return inverted && value !== 2 ? 1 - value : value;
}

function fold(values: readonly number[], dominating: number): number {
  if (values.includes(dominating)) return dominating;
  return values.includes(2) ? 2 : 1 - dominating;
}
