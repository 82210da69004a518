import type { Circuit, Port } from '../../compiler/circuit/circuit.js';
import { modelLayout } from '../../compiler/circuit/modelLayout.js';
import type { Design } from '../../compiler/compile.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { rowStride } from '../../runtime/layout.js';

/** Values of every net of a circuit in every cycle, when outputs are sampled: `0`, `1` or `x`. */
export type AllValues = (cycle: number, net: number) => string;

/** Runs a design on the reference interpreter with every net as an output. */
export function allVisible(
  { circuit, clocks, schedule, layout }: Design,
  state: Uint8Array,
  rows: Uint32Array,
  cycles: number,
): AllValues {
  const nets = Uint32Array.from({ length: circuit.netCount }, (_, net) => net);
  const msb = nets.length - 1;
  const port: Port = { name: 'all', msb, lsb: 0, isVector: true, nets };
  const visible: Circuit = { ...circuit, outputs: [port] };
  const { threeValued } = layout;
  const wide = modelLayout(visible, clocks, threeValued);
  const engine = new ReferenceEngine(visible, { layout: wide, clocks, schedule });
  const stride = rowStride(wide.outputs, threeValued);
  const response = new Uint32Array(cycles * stride);
  engine.reset(state);
  engine.run(cycles, rows, rowStride(layout.inputs, threeValued), response);
  const bit = (at: number, net: number) => (response[at + (net >>> 5)]! >>> (net & 31)) & 1;
  return (cycle, net) => {
    const at = cycle * stride;
    return threeValued && bit(at + wide.outputs.words, net) ? 'x' : `${bit(at, net)}`;
  };
}
