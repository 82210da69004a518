import { Core } from './core.js';
import { described } from './describedModule.js';
import type { ModelDescription } from './description.js';
import { Model } from './model.js';
import type { PowerUpOptions } from './powerUp.js';
import { compiled, type ModelSource, packagedModule } from './source.js';

/** How a model is loaded. */
export interface LoadOptions extends PowerUpOptions {
  /** Whether the module's bytes must have the SHA-256 that the package was written with. */
  readonly verify?: boolean;
}

/** Loads the model, powered up; each call makes an instance of its own. */
export async function load(
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  options: LoadOptions = {},
): Promise<Model> {
  const module = await compiled(source, options.verify ?? false);
  return new Model(await Core.create(await described<ModelDescription>(module)), options);
}
