import { Core } from './core.js';
import { described } from './describedModule.js';
import { Model } from './model.js';
import type { PowerUpOptions } from './powerUp.js';
import { compiled, type ModelSource, packagedModule } from './source.js';

/** How a model is loaded. */
export interface LoadOptions extends PowerUpOptions {
  /** Whether the module's bytes must have the SHA-256 that the package was written with. */
  readonly verify?: boolean;
}

/** Compiles the module once, for several instances or for a worker. */
export const compile = (
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  { verify = false }: Pick<LoadOptions, 'verify'> = {},
): Promise<WebAssembly.Module> => compiled(source, verify);

/** Loads the model, powered up; each call makes an instance of its own. */
export async function load(
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  options: LoadOptions = {},
): Promise<Model> {
  const module = await compiled(source, options.verify ?? false);
  return new Model(await Core.create(await described(module)), options);
}
