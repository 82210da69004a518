import { GateKind, isGate } from '../../circuit/gates.js';
import { roundLimit } from '../../circuit/loops.js';
import type { NetValue } from './algebra.js';
import type { Moment, SettledMoment } from './moment.js';
import { type LoopPlan, planLoop } from './planLoop.js';
import { Rounds } from './rounds.js';

/** Rounds of a loop that leads through a memory, whose words cannot be tried out. */
const MEMORY_ROUNDS = 16;

/**
 * Settles a combinational loop: its nets are evaluated in order, round after round, from the
 * values that they had before. Returns the value of each net.
 *
 * The rounds are unrolled; how many are needed is tried out by `planLoop`. What is not proven to
 * settle is watched: where a further round would change something, `Moment.unsettled` is told, and
 * three-valued models take the result of ternary settling (E. B. Eichelberger, "Hazard detection
 * in combinational and sequential switching circuits", IBM J. Res. Dev. 9(2), 1965).
 */
export function settleLoop(
  settled: SettledMoment,
  loop: number,
  outside: (net: number) => NetValue,
): NetValue[] {
  const { moment } = settled;
  const { algebra, loops } = moment;
  const nets = loops.nets(loop);
  const start = Array.from(nets, (net) => startValue(settled, net));
  if (isUnchanged(settled, loop, start, outside)) return start;
  const plan = readsMemory(moment, nets)
    ? throughMemory(nets)
    : planLoop(
        moment,
        nets,
        nets.filter((net) => remembers(moment, net)).length,
        start,
        loops.outside(loop),
        outside,
      );
  const rounds = new Rounds(moment, nets, outside);
  const { values } = rounds.run(start, plan.rounds);
  if (plan.isProven) return values;
  const further = rounds.run(values, 1).values;
  const moves = values
    .map((value, i) => algebra.differs(value, further[i]!))
    .reduce((any, each) => algebra.or(any, each));
  if (moves === algebra.zero) return values;
  if (!algebra.hasUnknown) {
    moment.unsettled(moves, nets, plan.isCut ? plan.rounds : undefined);
    return values;
  }
  const ternary = rounds.runTernary(start, (net) => remembers(moment, net));
  return values.map((value, i) => algebra.mux(moves, value, ternary[i]!));
}

function throughMemory({ length }: Uint32Array): LoopPlan {
  const limit = roundLimit(length);
  const rounds = Math.min(limit, MEMORY_ROUNDS);
  return { rounds, isProven: false, isCut: rounds < limit };
}

// Gates start from what they were, registers and latches from what they hold now. A gate that the
// loop evaluates before reading it may start from anything.
function startValue(settled: SettledMoment, net: number): NetValue {
  const { circuit, before, algebra, loops } = settled.moment;
  if (!isGate(circuit.kind[net]!)) return settled.held(net);
  return loops.isKept(net) ? before!.value(net) : algebra.zero;
}

// A loop that has settled and reads the same as then stays: logic must not grow by each wave.
function isUnchanged(
  settled: SettledMoment,
  loop: number,
  start: NetValue[],
  outside: (net: number) => NetValue,
): boolean {
  const { before, loops } = settled.moment;
  if (before === undefined || before.moment.kept !== undefined) return false;
  if (before.moment.writes !== settled.moment.writes) return false;
  const settledNets = loops.nets(loop);
  const holds = settledNets.every((net, i) => {
    const isHolder = !isGate(settled.moment.circuit.kind[net]!);
    return !isHolder || before.value(net) === start[i];
  });
  if (!holds) return false;
  if (!loops.outside(loop).every((net) => before.value(net) === outside(net))) return false;
  settledNets.forEach((net, i) => {
    start[i] = before.value(net);
  });
  return true;
}

const readsMemory = ({ circuit }: Moment, nets: Uint32Array): boolean =>
  nets.some((net) => circuit.kind[net] === GateKind.MemoryRead);

const remembers = ({ circuit, loops }: Moment, net: number): boolean =>
  loops.isKept(net) || !isGate(circuit.kind[net]!);
