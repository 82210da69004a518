export { type Engine, type Fault, type MarkingEngine, RunFault, type RunPoint } from './engine.js';
export { LaneEngine, type LaneFault } from './laneEngine.js';
export { type LaneCount, laneCounts, laneRowStride, laneRowWords } from './laneLayout.js';
export type { LaneModel } from './laneModel.js';
export { LaneRows, type LaneStimulusBlock, randomLaneStimulus } from './laneRows.js';
export {
  type MemoryLayout,
  type ModelLayout,
  type PortLayout,
  type RowLayout,
  rowStride,
} from './layout.js';
export { memoryStateBytes, wordBytes } from './memoryState.js';
export { fillRandomRows, RandomBits } from './random.js';
export { readBits, writeBits } from './rowBits.js';
export { Signature } from './signature.js';
export {
  heldStimulus,
  type ResponseBlock,
  type RunBlock,
  type RunOptions,
  randomStimulus,
  runBlocks,
  runBlocksSync,
  type StimulusBlock,
} from './stream.js';
export { type BitRange, formatValue } from './valueText.js';
export { WasmEngine, type WasmEngineOptions } from './wasmEngine.js';
export type { WasmModel } from './wasmModel.js';
export { type BitWeight, type WeightedOptions, weightedStimulus } from './weightedStimulus.js';
