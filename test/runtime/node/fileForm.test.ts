import { describe, expect, it } from 'vitest';
import { formOf, isCompressed } from '../../../runtime/node/fileForm.js';
import { openExpectation } from '../../../runtime/node/openExpectation.js';
import { ResponseWriter } from '../../../runtime/node/responseWriter.js';
import { layoutOf } from '../../support/tables.js';

describe('the form of a file', () => {
  it.each([
    ['a.csv', 'csv', false],
    ['a.CSV.gz', 'csv', true],
    ['table', 'csv', false],
    ['a.rows.csv', 'csv', false],
    ['-', 'csv', false],
    ['a.rows', 'packed', false],
    ['dir.csv/a.ROWS.GZ', 'packed', true],
    ['a.vcd', 'vcd', false],
    ['a.vcd.gz', 'vcd', true],
    ['a.mjs', 'module', false],
    ['a.js', 'module', false],
  ])('is told by its ending: %s', (path, form, compressed) => {
    expect(formOf(path)).toBe(form);
    expect(isCompressed(path)).toBe(compressed);
  });

  it('is csv or packed where a response is written or compared', () => {
    const layout = layoutOf([], ['y']);
    expect(() => new ResponseWriter('y.vcd', layout)).toThrow(
      new RangeError('a response is csv or packed, not vcd'),
    );
    expect(() => openExpectation('y.mjs', layout)).toThrow(
      new RangeError('an expectation is csv or packed, not module'),
    );
  });
});
