import { described } from '../describedModule.js';
import type { LaneDescription } from '../description.js';
import type { LoadOptions } from '../load.js';
import { compiled, type ModelSource, packagedModule } from '../source.js';
import { LaneCore } from './laneCore.js';
import { Lanes } from './lanes.js';

/**
 * Loads the model, all lanes powered up; each call makes an instance of its own. With random
 * power-up lane l starts as `load` of a model of one sequence does with seed + l.
 */
export async function load(
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  options: LoadOptions = {},
): Promise<Lanes> {
  const module = await compiled(source, options.verify ?? false);
  return new Lanes(await LaneCore.create(await described<LaneDescription>(module)), options);
}
