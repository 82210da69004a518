import type { Circuit } from '../circuit.js';

/** Calls `visit` with the net of each cell that has a table, and the nets it depends on while settling. */
export function eachSettler(
  { tables }: Circuit,
  visit: (output: number, nets: readonly number[]) => void,
): void {
  const { count, output, definition, definitions, inputStart, input } = tables;
  const places = definitions.map(({ two, three }) => [
    ...new Set([...(two?.settlers ?? []), ...three.settlers]),
  ]);
  for (let entry = 0; entry < count; entry++) {
    const start = inputStart[entry]!;
    const own = places[definition[entry]!]!;
    visit(
      output[entry]!,
      own.map((place) => input[start + place]!),
    );
  }
}
