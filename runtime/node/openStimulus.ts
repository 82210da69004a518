import type { ModelLayout } from '../layout.js';
import { formOf, type ValueForm } from './fileForm.js';
import { moduleStimulus } from './modules/moduleStimulus.js';
import { readPackedStimulus } from './packed/packedStimulus.js';
import type { StimulusSource } from './stimulusSource.js';
import { readStimulus } from './stimulusTable.js';
import { type VcdOptions, vcdStimulus } from './vcd/vcdStimulus.js';

/** How a stimulus is read. */
export interface StimulusSourceOptions extends Omit<VcdOptions, 'bytes'> {
  /** By the ending of the file unless given. */
  readonly form?: ValueForm;
}

/**
 * Opens a stimulus: a table, packed rows (`.rows`), a value change dump (`.vcd`) or a module
 * (`.mjs`, `.js`); compressed where `.gz` follows; standard input where the path is `-`. Throws
 * `FileError`, and what the file system throws.
 */
export async function openStimulus(
  path: string,
  layout: ModelLayout,
  options: StimulusSourceOptions = {},
): Promise<StimulusSource> {
  switch (options.form ?? formOf(path)) {
    case 'csv':
      return { blocks: () => readStimulus(path, layout), notes: () => [] };
    case 'packed':
      return { blocks: () => readPackedStimulus(path, layout), notes: () => [] };
    case 'vcd':
      return vcdStimulus(path, layout, options);
    case 'module':
      return moduleStimulus(path, layout);
  }
}
