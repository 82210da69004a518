import type { RowLayout } from '../../runtime/layout.js';

/** What stands for a net in emitted C, and how rows hold it. */
export interface CWords {
  /** Lines in front of all else. */
  readonly declarations: readonly string[];
  readonly type: string;
  readonly zeros: string;
  readonly ones: string;
  /** Lines at the start of the function that runs one cycle. */
  readonly opening: readonly string[];
  /** The value of an input bit; what is above its lowest bit may not count. */
  input(bit: number): string;
  /** Lines that write the response row of these nets. */
  outputs(nets: Uint32Array): string[];
  /** 32-bit numbers of a row. */
  rowNumbers(row: RowLayout): number;
}

/** One sequence: an `unsigned` of which bit 0 counts, and packed rows. */
export const packedWords: CWords = {
  declarations: [],
  type: 'unsigned',
  zeros: '0u',
  ones: '~0u',
  opening: [],
  input: (bit) => `in[${bit >>> 5}] >> ${bit & 31}`,
  outputs: packedOutputs,
  rowNumbers: ({ words }) => words,
};

function packedOutputs(nets: Uint32Array): string[] {
  const lines: string[] = [];
  for (let first = 0; first < nets.length; first += 32) {
    const bits = Array.from(nets.subarray(first, first + 32), (net, bit) =>
      bit === 0 ? `(n${net} & 1u)` : `(n${net} & 1u) << ${bit}`,
    );
    lines.push(`  out[${first >>> 5}] = ${bits.join(' | ')};`);
  }
  return lines;
}

/**
 * 128 sequences side by side: a vector of 16 bytes, as GCC and Clang know them, and lane rows (see
 * `laneRowWords`).
 */
export const vectorWords: CWords = {
  declarations: ['typedef unsigned vector __attribute__((vector_size(16)));'],
  type: 'vector',
  zeros: '(vector){0}',
  ones: '(vector){~0u, ~0u, ~0u, ~0u}',
  opening: [
    '  const vector *const row = (const vector *)in;',
    '  vector *const response = (vector *)out;',
    '  (void)row;',
    '  (void)response;',
  ],
  input: (bit) => `row[${bit}]`,
  outputs: (nets) => Array.from(nets, (net, bit) => `  response[${bit}] = n${net};`),
  rowNumbers: ({ bits }) => bits * 4,
};
