import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, type Design } from '../../compiler/compile.js';
import { createEngine, type EngineName } from '../../compiler/engines.js';
import { Signature } from '../../runtime/signature.js';
import { randomStimulus, runBlocksSync } from '../../runtime/stream.js';
import type { WasmModel } from '../../runtime/wasmModel.js';

/** A design, and the random run that every engine makes of it. */
export interface Run {
  readonly design: Design;
  readonly seed: number;
  readonly cycles: number;
}

/** A run as it travels to a browser: nothing but JSON. */
export interface Job {
  /** The compiled model, its byte arrays in base64. */
  readonly model: Omit<WasmModel, 'bytes' | 'stateInverted'> & {
    readonly bytes: string;
    readonly stateInverted: string;
  };
  /** Power-up value of every state element. */
  readonly state: readonly number[];
  readonly seed: number;
  readonly cycles: number;
}

const base64 = (bytes: Uint8Array): string => Buffer.from(bytes).toString('base64');

/** Compiles the design of a run and packs both for the way. */
export async function jobOf({ design, seed, cycles }: Run): Promise<Job> {
  const model = await compile(design);
  const { bytes, stateInverted } = model;
  return {
    model: { ...model, bytes: base64(bytes), stateInverted: base64(stateInverted) },
    state: Array.from(powerUp(design)),
    seed,
    cycles,
  };
}

/** The signature of a run on one of the engines, here in Node and from the sources. */
export async function signatureInNode(run: Run, name: EngineName): Promise<string> {
  const { design, seed, cycles } = run;
  const engine = await createEngine(design, name);
  engine.reset(powerUp(design));
  const signature = new Signature(design.layout);
  for (const block of runBlocksSync(engine, randomStimulus(design.layout, seed, cycles))) {
    signature.add(block.rows, block.cycles);
  }
  return signature.digits();
}

const powerUp = ({ circuit, layout }: Design): Uint8Array =>
  powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero');
