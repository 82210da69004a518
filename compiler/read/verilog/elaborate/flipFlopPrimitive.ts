import { Edge } from '../../../circuit/circuit.js';
import type { NetId } from '../../../circuit/ids.js';
import {
  type Asynchronous,
  asynchronousOf,
  buildAsynchronous,
  isActive,
  withoutAsynchronous,
} from './asynchronous.js';
import type { Recording } from './recording.js';
import type { StatePins } from './statePins.js';
import type { InputEdge, TableBehaviour } from './tableBehaviour.js';
import { buildTruthTable, dependsOn, truthTable } from './truthTable.js';

/** Builds a primitive that captures at one edge; returns the reason if it is no flip-flop. */
export function buildFlipFlop(
  behaviour: TableBehaviour,
  clock: InputEdge,
  pins: StatePins,
  recording: Recording,
): string | undefined {
  const { inputs, output, names, initial } = pins;
  const asynchronous = asynchronousOf(behaviour.given());
  for (const table of [asynchronous.set, asynchronous.reset]) {
    if (dependsOn(table, clock.input)) {
      return `its value depends on the level of ${names[clock.input]} as well as on its edge`;
    }
  }
  const moving = movingInput(behaviour, clock, asynchronous);
  if (moving !== undefined) {
    return `a change of ${names[moving]} alone makes its output change or x`;
  }
  recording.register({
    output,
    clock: inputs[clock.input]!,
    edge: clock.value === 1 ? Edge.Rising : Edge.Falling,
    data: dataOf(behaviour, clock, asynchronous, pins, recording),
    ...buildAsynchronous(asynchronous, inputs, recording),
    initial,
  });
  return undefined;
}

/** The net of what an edge captures while set and reset are inactive. */
export function dataOf(
  behaviour: TableBehaviour,
  clock: InputEdge,
  asynchronous: Asynchronous,
  { inputs, output }: StatePins,
  recording: Recording,
): NetId {
  const count = behaviour.inputs;
  // The state is one more input, after the others: an enable or a toggle reads it.
  const next = truthTable(count + 1, (place) => {
    const levels = behaviour.normal(place & ((1 << count) - 1));
    const atEdge = (levels & ~(1 << clock.input)) | (clock.value << clock.input);
    return behaviour.next(clock.input, atEdge, place >> count) === '1';
  });
  const data = withoutAsynchronous(next, count + 1, asynchronous);
  const nets = data.inputs.map((input) => inputs[input] ?? output);
  return buildTruthTable(data.table, nets, recording);
}

/** An input whose change, other than the clock's edge, does not leave the state alone. */
function movingInput(
  behaviour: TableBehaviour,
  clock: InputEdge,
  asynchronous: Asynchronous,
): number | undefined {
  const still = behaviour.combinations().filter((levels) => !isActive(asynchronous, levels));
  return behaviour.live.find((input) =>
    still.some((levels) => {
      if (input === clock.input && ((levels >> input) & 1) === clock.value) return false;
      return [0, 1].some((state) => {
        const next = behaviour.next(input, levels, state);
        return next !== undefined && next !== String(state);
      });
    }),
  );
}
