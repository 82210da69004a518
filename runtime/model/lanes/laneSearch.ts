import type { OutputValues } from '../condition.js';
import type { Ports } from '../ports.js';
import { checkFields, writeValue } from '../values.js';
import type { LaneCore } from './laneCore.js';

/** How a run to a condition ended. */
export interface LanesReached {
  /** Whether it has held in all lanes. */
  readonly met: boolean;
  /** Cycles that have passed. */
  readonly cycles: number;
  /** For each lane after how many cycles it held for the first time; undefined where it never did. */
  readonly first: (number | undefined)[];
}

/**
 * Runs until outputs have had certain values, at whatever moment, in each lane that goes on, at most
 * `limit` cycles.
 */
export function runLanesUntil(
  core: LaneCore,
  ports: Ports,
  values: OutputValues,
  limit: number,
): LanesReached {
  const wanted = wantedBits(core, ports, values);
  const first = new Array<number | undefined>(core.lanes).fill(undefined);
  const lanes = first.map((_, lane) => lane);
  for (let cycles = 0; ; cycles++) {
    const row = core.outputRow();
    for (let part = 0; part < core.lanes >>> 5; part++) {
      const holding = holdingIn(row, wanted, core.lanes >>> 5, part);
      for (let left = holding; left !== 0; left &= left - 1) {
        const lane = part * 32 + 31 - Math.clz32(left & -left);
        if (first[lane] === undefined && core.hasResult(lane)) first[lane] = cycles;
      }
    }
    const isMissing = lanes.some((lane) => first[lane] === undefined && core.hasResult(lane));
    if (!isMissing || cycles === limit) {
      return { met: first.every((each) => each !== undefined), cycles, first };
    }
    core.hold(1);
  }
}

/** A word of a lane row, and whether it must be 1. */
interface WantedBit {
  readonly word: number;
  readonly isOne: boolean;
}

function wantedBits(core: LaneCore, ports: Ports, values: OutputValues): WantedBit[] {
  const { outputs, threeValued } = core.layout;
  const row = core.row(new Uint32Array(core.outputStride), outputs);
  return Object.entries(checkFields(values, 'values of outputs')).flatMap(([name, value]) => {
    const port = ports.output(name);
    writeValue(row, port, value);
    return Array.from({ length: port.width * (threeValued ? 2 : 1) }, (_, i): WantedBit => {
      const group = i < port.width ? 0 : 1;
      const bit = port.offset + (i % port.width);
      const at = group * outputs.words * 32 + bit;
      return {
        word: group * outputs.bits + bit,
        isOne: ((row.words[at >>> 5]! >>> (at & 31)) & 1) === 1,
      };
    });
  });
}

/** Of 32 lanes those in which all bits are as wanted. */
function holdingIn(
  row: Uint32Array,
  wanted: readonly WantedBit[],
  parts: number,
  part: number,
): number {
  let holding = -1;
  for (const { word, isOne } of wanted) {
    const bits = row[word * parts + part]!;
    holding &= isOne ? bits : ~bits;
    if (holding === 0) break;
  }
  return holding;
}
