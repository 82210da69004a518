/** Clockstride's compiler: netlists in, WebAssembly models and interpreters out. */
export { activityTable } from './activity/activityTable.js';
export {
  type ActivityForm,
  type ActivityRequest,
  countActivity,
} from './activity/countActivity.js';
export type { NetActivity, NetCounts } from './activity/netActivity.js';
export { saif } from './activity/saif.js';
export { type BackgroundCompiler, openCompiler } from './background/compileThread.js';
export { CacheStore } from './cache/cacheStore.js';
export { ModelCache } from './cache/modelCache.js';
export type { Circuit, Latches, Port, Registers } from './circuit/circuit.js';
export { type ClockPort, type ClockPorts, findClockPorts } from './circuit/clockPorts.js';
export type { ClockSchedule, ClockTiming } from './circuit/clockSchedule.js';
export { type PowerUp, powerUpModes, powerUpState } from './circuit/powerUp.js';
export {
  type CompileOptions,
  compile,
  type Design,
  designOf,
  type ModelOptions,
} from './compile.js';
export { compileLanes } from './compileLanes.js';
export {
  addConditions,
  type ConditionOptions,
  type WatchedConditions,
} from './condition/conditions.js';
export { codeTable, type DiagnosticCode, type Severity } from './diagnostics/codes.js';
export { type Diagnostic, Diagnostics, headline, InputError } from './diagnostics/diagnostics.js';
export { Source, type Span } from './diagnostics/source.js';
export { type Emitter, localEmitter, startEmitter } from './emit/emitter.js';
export { createEngine, type EngineName, engineNames } from './engines.js';
export { type PackRequest, type PackSummary, packDesign } from './pack/packDesign.js';
export { PeriodSearch, type PeriodSearchOptions } from './period/periodSearch.js';
export { type PassSwitches, passNames } from './program/switches.js';
export { type NetlistReadOptions, readNetlist } from './read/readNetlist.js';
export { hashedInput, inputOf } from './record/inputs.js';
export { type Manifest, manifestOf, type RecordedInput } from './record/manifest.js';
export { type RecordedResponseOptions, recordedResponse } from './record/recordedResponse.js';
export { Recorder } from './record/recorder.js';
export { FolderFiles, type RecordFiles } from './record/recordFiles.js';
export { RunRecord } from './record/runRecord.js';
export { DamagedFile } from './record/sealedText.js';
export { benchDesign } from './report/bench.js';
export type { BenchResult } from './report/benchResult.js';
export { type Inspection, inspect, type Problem } from './report/inspection.js';
export { type Revisited, type RevisitRequest, revisitDesign } from './revisit/revisitDesign.js';
export { baseClocks } from './run/baseClocks.js';
export type { ActivitySummary } from './run/outlets/activitySummary.js';
export { type CompareDesignOptions, compareDesign } from './run/outlets/compareDesign.js';
export { type CompareFileOptions, compareFile } from './run/outlets/compareFile.js';
export { compareModel } from './run/outlets/compareModel.js';
export type { DepartureOptions } from './run/outlets/comparison.js';
export { followStimulus } from './run/outlets/followStimulus.js';
export type {
  Findings,
  Outlet,
  OutletBlock,
  OutletContext,
  OutletPlan,
  RunEnd,
  Stop,
  WatchedPlace,
} from './run/outlets/outlet.js';
export { signResponse } from './run/outlets/signResponse.js';
export type {
  StateSummary,
  StatesSummary,
  TransitionSummary,
} from './run/outlets/statesSummary.js';
export { type StopCondition, type StopOptions, stopWhen } from './run/outlets/stopWhen.js';
export { writeResponse } from './run/outlets/writeResponse.js';
export { type RunRequest, runDesign } from './run/runDesign.js';
export type { RunRecorder, RunStart } from './run/runRecorder.js';
export type { Mismatch, RunSummary } from './run/runSummary.js';
export { settleDesign } from './settle/settleDesign.js';
export type { SettleReport } from './settle/settleReport.js';
export { followStates, type StatesFile } from './states/followStates.js';
export { statesPicture } from './states/picture/statesPicture.js';
export { statesGraph } from './states/statesGraph.js';
export { statesTable } from './states/statesTable.js';
export { type StateVector, stateVectors } from './states/stateVectors.js';
export { pictureForm } from './waveform/picture/pictureForm.js';
export { portSignals, type SignalList, signalsOf } from './waveform/signalList.js';
export { tableForm } from './waveform/tableForm.js';
export { vcdForm } from './waveform/vcd/vcdForm.js';
export type { WaveForm, WaveRows, WaveSink, WaveWindow } from './waveform/wave.js';
export { writeWave } from './waveform/writeWave.js';
