export { bitWeights } from './bitWeights.js';
export { ReaderGone } from './bytes/byteSink.js';
export type { TableBytes } from './bytes/inputBytes.js';
export { type Departure, departureText, type ResponseChecker } from './departure.js';
export { ExpectationChecker } from './expectation.js';
export { formOf, STANDARD, type ValueForm, valueForms } from './fileForm.js';
export {
  type ModelBlock,
  ModelExpectation,
  type ModelOutputs,
  type ModelProgram,
  type ModelRun,
} from './modules/modelExpectation.js';
export type { StimulusProgram, StimulusRun, StimulusStep } from './modules/moduleStimulus.js';
export type { PortSeries } from './modules/portSeries.js';
export type { GivenValue, SeenValue } from './modules/portValues.js';
export { openExpectation } from './openExpectation.js';
export { openStimulus, type StimulusSourceOptions } from './openStimulus.js';
export { readPackedStimulus } from './packed/packedStimulus.js';
export { type ResponseChoice, ResponseChooser } from './responseChoice.js';
export { ResponseTable } from './responseTable.js';
export { ResponseWriter, type ResponseWriterOptions } from './responseWriter.js';
export type { StimulusSource } from './stimulusSource.js';
export { readStimulus } from './stimulusTable.js';
export { FileError, TableError } from './tableError.js';
export type { VcdClock, VcdOptions } from './vcd/vcdStimulus.js';
