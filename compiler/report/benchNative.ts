import { basename } from 'node:path';
import type { Design } from '../compile.js';
import { emitC } from '../native/emitC.js';
import { findCompiler } from '../native/findCompiler.js';
import { NativeProgram } from '../native/runC.js';
import type { Contestant } from './benchEngines.js';
import type { BenchOptions } from './benchOptions.js';
import type { BenchRows } from './benchRows.js';

/** Gates beyond which a C compiler takes minutes over the straight-line code of one cycle. */
const MOST_GATES = 60_000;

/** The design as compiled C; it must be closed. */
export interface NativeContestant extends Contestant {
  /** Name of the compiler's command. */
  readonly compiler: string;
  close(): void;
}

/** Code for this very machine, which no other one may understand. */
const MARCH = '-march=native';

/** A design's C, compiled in both ways, and notes on it; all must be closed. */
export interface NativeContestants {
  readonly contestants: readonly NativeContestant[];
  readonly notes: readonly string[];
}

/** Compiles a design's C at level 2, for any machine of the kind and for this one. */
export async function nativeContestants(
  design: Design,
  rows: BenchRows,
  gates: number,
  options: BenchOptions,
): Promise<NativeContestants> {
  const native = await nativeContestant(design, rows, gates, options);
  if ('note' in native) return { contestants: [], notes: [native.note] };
  const note = `native is C compiled by ${native.compiler} -O2`;
  const march = await nativeContestant(design, rows, gates, options, [MARCH]);
  if ('note' in march) return { contestants: [native], notes: [note, march.note] };
  return { contestants: [native, march], notes: [`${note}, nativeMarch the same with ${MARCH}`] };
}

/** Compiles a design's C with some flags, or tells in a note why that is not done. */
export async function nativeContestant(
  design: Design,
  rows: BenchRows,
  gates: number,
  { native = 'auto', environment, onProgress }: BenchOptions,
  flags: readonly string[] = [],
): Promise<NativeContestant | { readonly note: string }> {
  const name = flags.length === 0 ? 'native' : 'nativeMarch';
  const what = flags.length === 0 ? 'native C' : `native C with ${flags.join(' ')}`;
  const because = (reason: string) => ({ note: `${what} is not measured: ${reason}` });
  if (native === 'never') return because('it was not asked for');
  if (native === 'auto' && gates > MOST_GATES) {
    return because(
      `${gates} gates would keep a C compiler busy for minutes; --native always compiles them`,
    );
  }
  const found = findCompiler(environment);
  if ('missing' in found) return because(found.missing);
  const start = performance.now();
  const emitted = emitC(design, rows.state);
  if ('obstacle' in emitted) {
    return because(`a cycle is more than one step in C, since ${emitted.obstacle}`);
  }
  const emitMs = performance.now() - start;
  onProgress?.(['compiling', String(gates), 'gates of C', ...flags].join(' '));
  try {
    const program = await NativeProgram.build(emitted.text, found.command, rows, flags);
    return {
      name,
      compiler: [basename(found.command[0]!), ...found.command.slice(1)].join(' '),
      buildMs: emitMs + program.compileMs,
      respond: () => program.respond(),
      time: (cycles) => program.time(cycles),
      close: () => program.close(),
    };
  } catch (error) {
    return because((error as Error).message);
  }
}
