import { RunFault } from '../../runtime/engine.js';
import { takeCycles } from '../../runtime/skipCycles.js';
import type { StimulusBlock } from '../../runtime/stream.js';
import type { Design } from '../compile.js';
import type { EngineName } from '../engines.js';
import type { OutletPlan } from '../run/outlets/outlet.js';
import { type RunRequest, runDesign } from '../run/runDesign.js';
import type { RunRecorder, RunStart } from '../run/runRecorder.js';
import type { RunSummary } from '../run/runSummary.js';

/** What to see again of a run. */
export interface RevisitRequest
  extends Omit<RunRequest, 'from' | 'recorder' | 'outlets' | 'stimulus'> {
  /** A moment of the run at or before the window. */
  readonly start: RunStart;
  /** First and last cycle of the window. */
  readonly from: number;
  readonly to: number;
  /** The stimulus from a cycle on; asked for once or twice. */
  readonly stimulus: (
    cycle: number,
  ) => Promise<AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>>;
  /** Makes what looks at the window. */
  readonly outlets: () => OutletPlan[];
}

/** What was seen again. */
export interface Revisited {
  /** Cycles run altogether, and those of the window. */
  readonly cycles: number;
  readonly shown: number;
  /** What ran the window. */
  readonly engine: EngineName;
  /** Set where the window goes up to a cycle without result: why it has none. */
  readonly fault?: RunFault;
}

/**
 * Work of the reference interpreter, in nets times cycles, that takes about as long as making a
 * module with all nets in sight.
 */
const REFERENCE_WORK = 3e7;

/**
 * Runs some cycles of a run again, with nets in sight that generated code else leaves out.
 *
 * The engine asked for runs up to the window. There it hands over to generated code that keeps the
 * nets wanted, or where the window is short to the reference interpreter. A window that a cycle
 * without result cuts short is seen up to that cycle; throws `RunFault` where that lies before it.
 */
export async function revisitDesign(design: Design, request: RevisitRequest): Promise<Revisited> {
  const { start, from, to } = request;
  const engine = engineFor(design, to - from + 1, request.engine);
  const distance = from - start.cycle;
  const isNear = distance * design.circuit.netCount <= REFERENCE_WORK;
  const first = isNear ? start : await movedTo(design, request, from);
  try {
    const { cycles } = await windowFrom(design, request, first, engine, to);
    return { cycles: cycles - start.cycle, shown: Math.max(0, cycles - from), engine };
  } catch (fault) {
    if (!(fault instanceof RunFault) || fault.completed <= from) throw fault;
    await windowFrom(design, request, first, engine, fault.completed - 1);
    const cycles = fault.completed - start.cycle;
    return { cycles, shown: fault.completed - from, engine, fault };
  }
}

function engineFor({ circuit }: Design, cycles: number, wanted: EngineName): EngineName {
  if (wanted !== 'wasm') return wanted;
  return cycles * circuit.netCount <= REFERENCE_WORK ? 'reference' : 'wasm';
}

async function windowFrom(
  design: Design,
  request: RevisitRequest,
  first: RunStart,
  engine: EngineName,
  to: number,
): Promise<RunSummary> {
  const stimulus = await request.stimulus(first.cycle);
  return runDesign(design, {
    ...request,
    stimulus: request.cycles === undefined ? takeCycles(stimulus, to + 1 - first.cycle) : stimulus,
    ...(request.cycles !== undefined && { cycles: Math.min(request.cycles, to + 1) }),
    engine,
    from: { ...first, outlets: [] },
    outlets: request.outlets(),
  });
}

async function movedTo(design: Design, request: RevisitRequest, cycle: number): Promise<RunStart> {
  let reached: RunStart | undefined;
  const recorder: RunRecorder = {
    begin: async () => undefined,
    after: () => undefined,
    end: async (_, last) => {
      reached = last;
      return [];
    },
  };
  const stimulus = await request.stimulus(request.start.cycle);
  await runDesign(design, {
    ...request,
    stimulus: takeCycles(stimulus, cycle - request.start.cycle),
    ...(request.cycles !== undefined && { cycles: Math.min(request.cycles, cycle) }),
    from: { ...request.start, outlets: [] },
    outlets: [],
    recorder,
  });
  return reached!;
}
