import type { Circuit } from '../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import { modelLayout } from '../../compiler/circuit/modelLayout.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import type { Engine } from '../../runtime/engine.js';
import { type ModelLayout, type RowLayout, rowStride } from '../../runtime/layout.js';

/** A reference engine for a circuit, with the clocks that are found in it. */
export function referenceFor(circuit: Circuit, threeValued = false): ReferenceEngine {
  const clocks = findClockPorts(circuit);
  return new ReferenceEngine(circuit, {
    clocks,
    layout: modelLayout(circuit, clocks, threeValued),
  });
}

/**
 * Packs rows written as one character a bit: `0`, `1` or `x`, ports in order, each port's most
 * significant bit first. Spaces are skipped.
 */
export function packRows(
  layout: ModelLayout,
  row: RowLayout,
  rows: readonly string[],
): Uint32Array {
  const stride = rowStride(row, layout.threeValued);
  const packed = new Uint32Array(rows.length * stride);
  rows.forEach((text, r) => {
    const digits = text.replaceAll(' ', '');
    if (digits.length !== row.bits) throw new RangeError(`a row has ${row.bits} bits: ${text}`);
    for (const [place, bit] of bitOrder(row).entries()) {
      const word = r * stride + (bit >>> 5) + (digits[place] === 'x' ? row.words : 0);
      if (digits[place] !== '0') packed[word]! |= 1 << (bit & 31);
    }
  });
  return packed;
}

/** Writes packed rows in the form that `packRows` takes, a space between two ports. */
export function unpackRows(layout: ModelLayout, row: RowLayout, packed: Uint32Array): string[] {
  const stride = rowStride(row, layout.threeValued);
  const bitAt = (at: number, bit: number) => (packed[at + (bit >>> 5)]! >>> (bit & 31)) & 1;
  const rows: string[] = [];
  for (let at = 0; at + stride <= packed.length && stride > 0; at += stride) {
    const ports = row.ports.map((port) => {
      const bits = Array.from({ length: port.width }, (_, i) => port.offset + port.width - 1 - i);
      return bits
        .map((bit) => (layout.threeValued && bitAt(at + row.words, bit) ? 'x' : bitAt(at, bit)))
        .join('');
    });
    rows.push(ports.join(' '));
  }
  return rows;
}

/** Runs an engine over rows as `packRows` takes them; returns the response in the same form. */
export function play(engine: Engine, rows: readonly string[]): string[] {
  const { layout } = engine;
  const stride = rowStride(layout.inputs, layout.threeValued);
  const response = new Uint32Array(rows.length * rowStride(layout.outputs, layout.threeValued));
  engine.run(rows.length, packRows(layout, layout.inputs, rows), stride, response);
  return unpackRows(layout, layout.outputs, response);
}

function bitOrder(row: RowLayout): number[] {
  return row.ports.flatMap((port) =>
    Array.from({ length: port.width }, (_, i) => port.offset + port.width - 1 - i),
  );
}
