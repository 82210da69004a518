import { type Design, programsOf } from '../../compile.js';
import { compileLanes } from '../../compileLanes.js';
import { CompiledLanes } from './compiledLanes.js';
import { InterpretedLanes } from './interpretedLanes.js';
import type { LaneMachine } from './laneMachine.js';
import { BLOCK_LANES } from './laneOperations.js';

/**
 * Gates times blocks from which on compiling pays: it takes about a second, as some thousands of
 * interpreted cycles of so much do.
 */
const WORTH_COMPILING = 20_000;

/** What carries out the cycles of so many lanes: compiled where that is much work. */
export async function chooseLanes(design: Design, lanes: number): Promise<LaneMachine> {
  const blocks = Math.ceil(lanes / BLOCK_LANES);
  return design.circuit.netCount * blocks >= WORTH_COMPILING
    ? CompiledLanes.create(await compileLanes(design, BLOCK_LANES), blocks)
    : new InterpretedLanes(programsOf(design), blocks);
}
