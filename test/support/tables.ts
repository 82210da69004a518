import { layRow, type ModelLayout, type PortLayout } from '../../runtime/layout.js';

/** A layout of ports written as `a` or `v[7:0]`. */
export function layoutOf(
  inputs: readonly string[],
  outputs: readonly string[],
  options: { threeValued?: boolean; clocks?: readonly string[] } = {},
): ModelLayout {
  return {
    name: 'table',
    threeValued: options.threeValued ?? false,
    clocks: options.clocks ?? [],
    inputs: layRow(inputs.map(portOf)),
    outputs: layRow(outputs.map(portOf)),
    stateNames: [],
    memories: [],
  };
}

function portOf(text: string): Omit<PortLayout, 'offset'> {
  const [, name, left, right] = /^(\w+)(?:\[(\d+):(\d+)\])?$/.exec(text) ?? [];
  if (left === undefined) return { name: text, width: 1, msb: 0, lsb: 0, isVector: false };
  const msb = Number(left);
  const lsb = Number(right);
  return { name: name!, width: Math.abs(msb - lsb) + 1, msb, lsb, isVector: true };
}

/** A text as the bytes of a file, in pieces of some length. */
export function* bytesOf(text: string, pieceLength = 1 << 16): Generator<Uint8Array> {
  const bytes = new TextEncoder().encode(text);
  for (let at = 0; at < bytes.length; at += pieceLength) {
    yield bytes.slice(at, at + pieceLength);
  }
}
