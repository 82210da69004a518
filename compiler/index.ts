/** Clockstride's compiler: netlists in, WebAssembly models and interpreters out. */
export type { Circuit, Latches, Port, Registers } from './circuit/circuit.js';
export { type ClockPort, type ClockPorts, findClockPorts } from './circuit/clockPorts.js';
export type { ClockSchedule, ClockTiming } from './circuit/clockSchedule.js';
export { type PowerUp, powerUpModes, powerUpState } from './circuit/powerUp.js';
export { type CompileOptions, compile, type Design, designOf } from './compile.js';
export { codeTable, type DiagnosticCode, type Severity } from './diagnostics/codes.js';
export { type Diagnostic, Diagnostics, headline, InputError } from './diagnostics/diagnostics.js';
export { Source, type Span } from './diagnostics/source.js';
export { type Emitter, localEmitter, startEmitter } from './emit/emitter.js';
export { createEngine, type EngineName, engineNames } from './engines.js';
export { type NetlistReadOptions, readNetlist } from './read/readNetlist.js';
export { benchDesign } from './report/bench.js';
export type { BenchResult } from './report/benchResult.js';
export { type Inspection, inspect, type Problem } from './report/inspection.js';
export { type RunRequest, runDesign } from './run/runDesign.js';
export type { Mismatch, RunSummary } from './run/runSummary.js';
export { settleDesign } from './settle/settleDesign.js';
export type { SettleReport } from './settle/settleReport.js';
