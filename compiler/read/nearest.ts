// So many names are looked through for a message; more would keep the user waiting.
const MOST_NAMES = 20_000;

/**
 * The name that another one was most likely meant to be: it differs in the case of letters, or in
 * so few letters as its length allows. Undefined where none is near.
 */
export function nearest(name: string, names: Iterable<string>): string | undefined {
  const lower = name.toLowerCase();
  let best: string | undefined;
  // One letter of three may be wrong, two at most.
  let least = Math.min(2, Math.floor(name.length / 3)) + 1;
  let count = 0;
  for (const candidate of names) {
    if (++count > MOST_NAMES) break;
    if (candidate === name || Math.abs(candidate.length - name.length) >= Math.max(1, least))
      continue;
    const distance = candidate.toLowerCase() === lower ? 0 : editDistance(name, candidate);
    if (distance >= least) continue;
    least = distance;
    best = candidate;
  }
  return best;
}

/** `; did you mean NAME?` or nothing. */
export function hintOf(name: string, names: Iterable<string>): string {
  const near = nearest(name, names);
  return near === undefined ? '' : `; did you mean ${near}?`;
}

/**
 * Letters to be added, taken away, changed or swapped with their neighbour (F. J. Damerau, "A
 * technique for computer detection and correction of spelling errors", CACM 7(3), 1964; from memory).
 */
function editDistance(a: string, b: string): number {
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const change = a[i - 1] === b[j - 1] ? 0 : 1;
      let distance = Math.min(last[j]! + 1, row[j - 1]! + 1, last[j - 1]! + change);
      const isSwap = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
      if (isSwap) distance = Math.min(distance, beforeLast[j - 2]! + 1);
      row.push(distance);
    }
    beforeLast = last;
    last = row;
  }
  return last[b.length]!;
}
