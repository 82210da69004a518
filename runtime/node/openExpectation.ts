import type { ModelLayout } from '../layout.js';
import type { ResponseChecker } from './departure.js';
import { ExpectationChecker } from './expectation.js';
import { formOf, type ValueForm } from './fileForm.js';
import { PackedExpectation } from './packed/packedExpectation.js';

/**
 * Opens what a response is compared with: a table, or packed rows where the ending is `.rows`;
 * compressed where `.gz` follows; standard input where the path is `-`. Throws RangeError for
 * another form, `TableError`, and what the file system throws.
 */
export function openExpectation(
  path: string,
  layout: ModelLayout,
  form: ValueForm = formOf(path),
): Promise<ResponseChecker> {
  if (form === 'csv') return ExpectationChecker.open(path, layout);
  if (form === 'packed') return PackedExpectation.open(path, layout);
  throw new RangeError(`an expectation is csv or packed, not ${form}`);
}
