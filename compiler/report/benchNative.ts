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

/** Compiles a design's C, or tells in a note why that is not done. */
export async function nativeContestant(
  design: Design,
  rows: BenchRows,
  gates: number,
  { native = 'auto', environment, onProgress }: BenchOptions,
): Promise<NativeContestant | { readonly note: string }> {
  const because = (reason: string) => ({ note: `native C is not measured: ${reason}` });
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
  onProgress?.(`compiling ${gates} gates of C`);
  try {
    const program = await NativeProgram.build(emitted.text, found.command, rows);
    return {
      name: 'native',
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
