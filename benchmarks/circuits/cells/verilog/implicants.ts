/** A row of a table: per input `0`, `1` or `?`. */
export type Cube = string;

/**
 * All prime implicants of a truth table (bit i is the value for combination i, input k is bit k of
 * i): the rows of a primitive that gives no x where an unknown input makes no difference. Method:
 * E. J. McCluskey, "Minimization of Boolean functions", 1956.
 */
export function primeImplicants(table: bigint, inputs: number): Cube[] {
  const rows = Array.from({ length: 1 << inputs }, (_, row) => row);
  const isOne = (row: number) => ((table >> BigInt(row)) & 1n) === 1n;
  let level = new Set(rows.filter(isOne).map((row) => cubeOf(row, inputs)));
  const primes: Cube[] = [];
  while (level.size > 0) {
    const wider = new Set<Cube>();
    const joined = new Set<Cube>();
    for (const cube of level) {
      for (const neighbour of neighbours(cube)) {
        if (!level.has(neighbour.cube)) continue;
        joined.add(cube);
        wider.add(replaced(cube, neighbour.place, '?'));
      }
    }
    primes.push(...[...level].filter((cube) => !joined.has(cube)));
    level = wider;
  }
  return primes;
}

function cubeOf(row: number, inputs: number): Cube {
  return Array.from({ length: inputs }, (_, k) => (row >> k) & 1).join('');
}

function neighbours(cube: Cube): { readonly cube: Cube; readonly place: number }[] {
  return [...cube].flatMap((digit, place) =>
    digit === '?' ? [] : [{ place, cube: replaced(cube, place, digit === '0' ? '1' : '0') }],
  );
}

function replaced(cube: Cube, place: number, digit: string): Cube {
  return cube.slice(0, place) + digit + cube.slice(place + 1);
}
