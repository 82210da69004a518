/**
 * What tables for parts of a circuit could save: `npx tsx benchmarks/speed/groups.ts NETLIST...`.
 *
 * Registers that depend on each other in circles are machines by themselves. One whose next state
 * follows from few bits could be looked up in a table, as a whole small circuit is. This counts, for
 * each that has at most `MOST_BITS` bits to look at, all operations of its next state, and what
 * putting the bits together and apart again would cost: an upper bound of what can be saved, since
 * operations that others read too must stay.
 */
import { readFileSync } from 'node:fs';
import { basename } from 'node:path';
import { TarjanSearch } from '../../compiler/circuit/tarjan.js';
import { cyclesOf, designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { type Logic, LogicOp, nodeOf } from '../../compiler/logic/logic.js';
import { compact } from '../../compiler/passes/compact.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';

/** Of a table that stays in the first-level cache. */
const MOST_BITS = 14;

/** Instructions for a bit that goes into the address, and for one that comes out. */
const BIT_IN = 3;
const BIT_OUT = 2;

interface Cone {
  readonly operations: ReadonlySet<number>;
  /** Nodes of inputs and state bits. */
  readonly leaves: ReadonlySet<number>;
}

function coneOf({ op, a, b, c }: Logic, root: number): Cone {
  const operations = new Set<number>();
  const leaves = new Set<number>();
  const stack = [root];
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    if (node === 0 || operations.has(node) || leaves.has(node)) continue;
    if (op[node]! < LogicOp.And || op[node]! > LogicOp.Mux) leaves.add(node);
    else {
      operations.add(node);
      stack.push(nodeOf(a[node]!), nodeOf(b[node]!));
      if (op[node] === LogicOp.Mux) stack.push(nodeOf(c[node]!));
    }
  }
  return { operations, leaves };
}

const united = <Item>(sets: readonly ReadonlySet<Item>[]): Set<Item> =>
  new Set(sets.flatMap((set) => [...set]));

function summaryOf(logic: Logic): string {
  const cones = logic.next.map((literal) => coneOf(logic, nodeOf(literal)));
  const reads = cones.map(({ leaves }) =>
    [...leaves].filter((node) => logic.op[node] === LogicOp.State).map((node) => logic.a[node]!),
  );
  const circles = new TarjanSearch(cones.length, (bit, i) => reads[bit]![i] ?? -1).components();
  const all = logic.op.reduce((sum, op) => sum + Number(op >= LogicOp.And), 0);
  let saved = 0;
  let parts = 0;
  for (const bits of circles) {
    const leaves = united(bits.map((bit) => cones[bit]!.leaves));
    if (leaves.size > MOST_BITS) continue;
    const { size } = united(bits.map((bit) => cones[bit]!.operations));
    const gain = size - leaves.size * BIT_IN - bits.length * BIT_OUT;
    if (gain <= 0) continue;
    saved += gain;
    parts++;
  }
  const largest = Math.max(0, ...circles.map(({ length }) => length));
  return `${all} operations, ${circles.length} parts that feed back, the largest of ${largest} bits; \
${parts} worth a table, which would save ${saved} operations at most`;
}

for (const file of process.argv.slice(2)) {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source(file, readFileSync(file))], {}, diagnostics);
  diagnostics.throwIfErrors();
  const [cycle] = cyclesOf(designOf(circuit!)).cycles;
  process.stdout.write(`${basename(file)}: ${summaryOf(compact(cycle!))}\n`);
}
