import type { Engine } from '../../runtime/engine.js';
import { type ModelLayout, type RowLayout, rowStride } from '../../runtime/layout.js';
import { readBits, writeBits } from '../../runtime/rowBits.js';
import { responseOf } from './responses.js';

/** Values of input ports by name; a port left out keeps its value of the row before, first 0. */
export type PortValues = Readonly<Record<string, bigint | number>>;

/** Reads an output port's value out of a response. */
export type ReadPort = (port: string, cycle: number) => bigint;

/** Packs two-valued stimulus rows. Throws RangeError for an unknown port. */
export function packValues(layout: ModelLayout, rows: readonly PortValues[]): Uint32Array {
  const { inputs } = layout;
  const stride = rowStride(inputs, false);
  const packed = new Uint32Array(rows.length * stride);
  rows.forEach((row, i) => {
    const at = i * stride;
    if (i > 0) packed.copyWithin(at, at - stride, at);
    for (const [name, value] of Object.entries(row)) {
      const { offset, width } = portNamed(inputs, name);
      let rest = BigInt(value);
      for (let bit = 0; bit < width; bit += 32) {
        const count = Math.min(32, width - bit);
        writeBits(packed, at, offset + bit, count, Number(rest & 0xffffffffn));
        rest >>= 32n;
      }
    }
  });
  return packed;
}

/** Reads values of output ports out of packed two-valued response rows. */
export function valuesOf(layout: ModelLayout, response: Uint32Array): ReadPort {
  const { outputs } = layout;
  const stride = rowStride(outputs, false);
  return (name, cycle) => {
    const { offset, width } = portNamed(outputs, name);
    let value = 0n;
    for (let bit = 0; bit < width; bit += 32) {
      const part = readBits(response, cycle * stride, offset + bit, Math.min(32, width - bit));
      value |= BigInt(part) << BigInt(bit);
    }
    return value;
  };
}

/** Runs an engine from where it stands over rows of port values; gives its response by port. */
export function playValues(engine: Engine, rows: readonly PortValues[]): ReadPort {
  const { layout } = engine;
  return valuesOf(layout, responseOf(engine, rows.length, packValues(layout, rows)));
}

function portNamed(row: RowLayout, name: string) {
  const port = row.ports.find((candidate) => candidate.name === name);
  if (port !== undefined) return port;
  throw new RangeError(`no port is named ${name}; there are ${row.ports.map((p) => p.name)}`);
}
