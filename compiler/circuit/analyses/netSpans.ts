import type { Span } from '../../diagnostics/source.js';
import type { Circuit } from '../circuit.js';

/** Where the driver of a net stands, or undefined for a circuit that comes from no text. */
export function spanOfNet(circuit: Circuit, net: number): Span | undefined {
  const source = circuit.sources[circuit.originSource[net]!];
  const start = circuit.originOffset[net]!;
  return source && { source, start, end: start };
}
