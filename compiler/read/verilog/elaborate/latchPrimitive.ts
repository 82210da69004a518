import { GateKind } from '../../../circuit/gates.js';
import {
  type Asynchronous,
  asynchronousOf,
  buildAsynchronous,
  withoutAsynchronous,
} from './asynchronous.js';
import type { Recording } from './recording.js';
import type { StatePins } from './statePins.js';
import type { TableBehaviour } from './tableBehaviour.js';
import { buildTruthTable, cofactor } from './truthTable.js';

/** Builds a primitive without clock; returns the reason if it is no latch. */
export function buildLatch(
  behaviour: TableBehaviour,
  pins: StatePins,
  recording: Recording,
): string | undefined {
  const outcomes: string[] = [];
  for (let levels = 0; levels < 1 << behaviour.inputs; levels++) {
    const normal = behaviour.normal(levels);
    const fromZero = behaviour.steady(normal, 0);
    const fromOne = behaviour.steady(normal, 1);
    if (fromZero === undefined || fromOne === undefined) {
      return 'its value depends on which input changed last';
    }
    if (fromZero === fromOne) outcomes.push(fromZero);
    else if (fromZero === '0' && fromOne === '1') outcomes.push('-');
    else return 'for some inputs its output changes back and forth, or holds only one value';
  }
  const all = asynchronousOf(outcomes);
  const { output, inputs, initial } = pins;
  const enabled = enabledLatch(all, outcomes, behaviour);
  if (enabled === undefined) {
    recording.latch({ output, ...buildAsynchronous(all, inputs, recording), initial });
    return undefined;
  }
  const { enable, value, data } = enabled;
  const others = inputs.filter((_, input) => input !== enable);
  const pin = inputs[enable]!;
  recording.latch({
    output,
    enable: value === 1 ? pin : recording.gate(GateKind.Not, [pin]),
    data: buildTruthTable(
      data.table,
      data.inputs.map((input) => others[input]!),
      recording,
    ),
    ...buildAsynchronous(enabled.asynchronous, others, recording),
    initial,
  });
  return undefined;
}

interface EnabledLatch {
  /** The input that enables, and its value then. */
  readonly enable: number;
  readonly value: number;
  /** Functions of the other inputs. */
  readonly asynchronous: Asynchronous;
  readonly data: ReturnType<typeof withoutAsynchronous>;
}

/**
 * Reads set and reset as enable and data: an input at one value of which the state only changes
 * by what would change it at the other value too, and is always given at that one.
 */
function enabledLatch(
  { set, reset }: Asynchronous,
  outcomes: readonly string[],
  { inputs, live }: TableBehaviour,
): EnabledLatch | undefined {
  const found: { latch: EnabledLatch; active: number }[] = [];
  for (const enable of live) {
    for (const value of [1, 0]) {
      const asynchronous = {
        set: cofactor(set, enable, 1 - value),
        reset: cofactor(reset, enable, 1 - value),
      };
      const open = { set: cofactor(set, enable, value), reset: cofactor(reset, enable, value) };
      if (!isGiven(open, asynchronous)) continue;
      const data = withoutAsynchronous(open.set, inputs - 1, asynchronous);
      if (!data.table.includes('0') || !data.table.includes('1')) continue;
      const active = [...asynchronous.set, ...asynchronous.reset].filter((bit) => bit === '1');
      found.push({ latch: { enable, value, asynchronous, data }, active: active.length });
    }
  }
  found.sort((a, b) => a.active - b.active);
  return outcomes.includes('-') ? found[0]?.latch : undefined;
}

/** Whether every state is given while enabled, by the asynchronous inputs where those are active. */
function isGiven(open: Asynchronous, { set, reset }: Asynchronous): boolean {
  return [...open.set].every((isSet, i) => {
    const isReset = open.reset[i]!;
    if (set[i] === '1' || reset[i] === '1') return isSet === set[i] && isReset === reset[i];
    return (isSet === '1') !== (isReset === '1');
  });
}
