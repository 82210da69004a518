import type { ResponseBlock, StimulusBlock } from '../stream.js';

/** A stimulus and what belongs to it. */
export interface StimulusSource {
  /** The blocks, once. */
  blocks(): AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>;
  /** What is to be said of it when it is over. */
  notes(): readonly string[];
  /** Where it looks back: told each block of the response before it is asked for more. */
  readonly see?: ((block: ResponseBlock) => void) | undefined;
}
