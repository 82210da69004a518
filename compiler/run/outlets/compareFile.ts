import { openExpectation, type ValueForm } from '../../../runtime/node/index.js';
import { Comparison, type DepartureOptions, type SavedComparison } from './comparison.js';
import type { OutletPlan } from './outlet.js';

/** How a response is compared with a file. */
export interface CompareFileOptions extends DepartureOptions {
  /** `csv` or `packed`; by the ending of the file unless given. */
  readonly form?: ValueForm;
}

/** Compares the response with a table or with packed rows. */
export function compareFile(path: string, options: CompareFileOptions = {}): OutletPlan {
  return {
    open: async ({ design, saved }) => {
      const checker = await openExpectation(path, design.layout, options.form);
      return Comparison.of(checker, options, saved as SavedComparison | undefined);
    },
  };
}
