import type { Definition, Net } from '../../nets.js';
import { FlatDesign } from './flatDesign.js';
import { cellCounts, FlatNetlist, type MappingOptions } from './flatNetlist.js';

const plain: MappingOptions = { hasClockTree: false, hasPowerPins: false };

/**
 * A circuit of the structural writer mapped onto the library of cells: one flat module with the
 * same ports, as a layout flow would write it. The library's file has to be read with it. Flip-flops
 * behave alike where all registers power up at 0. `gates` of its size counts cells without state,
 * those of a clock tree and for the layout not among them.
 */
export function mapped(circuit: Definition, options: Partial<MappingOptions> = {}): Definition {
  const all = { ...plain, ...options };
  const design = new FlatDesign(circuit, all.hasClockTree);
  return {
    name: circuit.name,
    ports: circuit.ports.map((port): Net => ({ ...port })),
    parts: () => [],
    lines: () => new FlatNetlist(design, all).lines(),
    size: () => cellCounts(design),
  };
}
