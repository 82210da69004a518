import { deepestPath } from '../../circuit/analyses/deepestPath.js';
import type { Circuit } from '../../circuit/circuit.js';
import { portBitName } from '../../circuit/clockPorts.js';
import { gateInfo } from '../../circuit/gates.js';
import { writePins } from '../../circuit/memoryTable.js';
import type { NetWords } from './netWords.js';

/** A net on a path and what drives it; or, as the last step, what the path ends at. */
export interface PathStep {
  readonly net: string;
  /** A gate or source such as `nand`, `register`, `input`; `output` where the path ends there. */
  readonly kind: string;
  /** Where the gate stands, for a net without a name. */
  readonly file?: string;
  readonly line?: number;
}

/**
 * One of the longest paths through gates: its source, its gates in order, and the register, latch
 * or output that it ends at, which is missing where nothing but gates reads the last one.
 */
export function deepestSteps(circuit: Circuit, level: Uint32Array, words: NetWords): PathStep[] {
  const nets = deepestPath(circuit, level);
  if (nets.length === 0) return [];
  const steps = Array.from(nets, (net) => step(circuit, net, words));
  const end = endOf(circuit, nets[nets.length - 1]!, words);
  return end === undefined ? steps : [...steps, end];
}

function step(circuit: Circuit, net: number, words: NetWords): PathStep {
  const named = { net: words.name(net), kind: gateInfo(circuit.kind[net]!).name };
  const span = words.hasName(net) ? undefined : words.span(net);
  if (span === undefined) return named;
  const { source, start } = span;
  return { ...named, file: source.path, line: source.place(start).line };
}

function endOf(circuit: Circuit, net: number, words: NetWords): PathStep | undefined {
  const { registers, latches, outputs } = circuit;
  for (const { output, ...pins } of [registers, latches]) {
    const control = 'clock' in pins ? pins.clock : pins.enable;
    for (const column of [pins.data, pins.set, pins.reset, control]) {
      const entry = column.indexOf(net);
      if (entry >= 0) return step(circuit, output[entry]!, words);
    }
  }
  for (const { name, writes } of circuit.memories) {
    if (writes.some((port) => writePins(port).includes(net))) return { net: name, kind: 'memory' };
  }
  for (const port of outputs) {
    const bit = port.nets.indexOf(net);
    if (bit >= 0) return { net: portBitName(port, bit), kind: 'output' };
  }
  return undefined;
}
