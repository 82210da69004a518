import { ModelExpectation } from '../../../runtime/node/index.js';
import { Comparison, type DepartureOptions } from './comparison.js';
import type { OutletPlan } from './outlet.js';

/** Compares the response with what a JavaScript module computes; see `ModelProgram`. */
export function compareModel(path: string, options: DepartureOptions = {}): OutletPlan {
  return {
    open: async ({ design }) =>
      new Comparison(await ModelExpectation.open(path, design.layout), options),
  };
}
