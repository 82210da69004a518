import type { VcdClock } from '../../runtime/node/index.js';
import type { ClockTiming } from '../circuit/clockSchedule.js';
import type { Design } from '../compile.js';

/**
 * The clocks whose edges may make the cycles of a recording: the base clock, which is the first of
 * the timings; any clock where all tick together.
 */
export function baseClocks(
  { circuit, clocks }: Design,
  timings?: readonly ClockTiming[],
): VcdClock[] {
  const base = timings?.[0]?.port;
  return clocks.ports
    .filter(({ name }) => base === undefined || name === base)
    .flatMap(({ net, inactive }): VcdClock[] => {
      const port = circuit.inputs.find(({ nets }) => nets.includes(net));
      if (port === undefined) return [];
      const { name, msb, lsb, isVector, nets } = port;
      const shape = { name, width: nets.length, msb, lsb, isVector };
      return [{ port: shape, bit: nets.indexOf(net), active: inactive === 0 ? 1 : 0 }];
    });
}
