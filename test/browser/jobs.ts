import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, type Design } from '../../compiler/compile.js';
import { createEngine, type EngineName } from '../../compiler/engines.js';
import { Signature } from '../../runtime/signature.js';
import { randomStimulus, runBlocksSync } from '../../runtime/stream.js';

/** A design, and the random run that every engine makes of it. */
export interface Run {
  readonly design: Design;
  readonly seed: number;
  readonly cycles: number;
}

/** A run as it travels to a browser. */
export interface Job {
  /** The compiled model as JSON; an array of bytes is an object `{base64}`. */
  readonly model: string;
  /** Power-up value of every state element. */
  readonly state: readonly number[];
  readonly seed: number;
  readonly cycles: number;
}

/** Compiles the design of a run and packs both for the way. */
export async function jobOf({ design, seed, cycles }: Run): Promise<Job> {
  const model = JSON.stringify(await compile(design), (_, value: unknown) =>
    value instanceof Uint8Array ? { base64: Buffer.from(value).toString('base64') } : value,
  );
  return { model, state: Array.from(powerUp(design)), seed, cycles };
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

/** The signature of a job here in Node, by the built runtime and the function that pages use. */
export async function signatureOfBuilt(job: Job): Promise<string> {
  const built = await import(new URL('../../dist/runtime/index.js', import.meta.url).href);
  const { signatureOf } = await import(new URL('page/signatureOf.mjs', import.meta.url).href);
  return signatureOf(built, job);
}

const powerUp = ({ circuit, layout }: Design): Uint8Array =>
  powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero');
