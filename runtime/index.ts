export { type Engine, type Fault, RunFault } from './engine.js';
export { type ModelLayout, type PortLayout, type RowLayout, rowStride } from './layout.js';
export { fillRandomRows, RandomBits } from './random.js';
export { readBits, writeBits } from './rowBits.js';
export { Signature } from './signature.js';
export {
  heldStimulus,
  type ResponseBlock,
  type RunOptions,
  randomStimulus,
  runBlocks,
  runBlocksSync,
  type StimulusBlock,
} from './stream.js';
export { type BitRange, formatValue } from './valueText.js';
export { WasmEngine } from './wasmEngine.js';
export type { WasmModel } from './wasmModel.js';
