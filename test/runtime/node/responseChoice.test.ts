import { describe, expect, it } from 'vitest';
import type { ResponseChoice } from '../../../runtime/node/responseChoice.js';
import { ResponseTable } from '../../../runtime/node/responseTable.js';
import { packRows } from '../../support/rows.js';
import { layoutOf } from '../../support/tables.js';

const layout = layoutOf([], ['y', 'v[6:0]', 'z'], { threeValued: true });
const rows = ['0 0000001 0', '0 0000001 1', '0 0000011 1', 'x 0000011 1', '0 0000011 1'];

/** The table of the rows, in two blocks; lines without the header, joined. */
function linesOf(choice: ResponseChoice): string {
  const table = new ResponseTable(layout, choice);
  let text = '';
  for (const [from, to] of [
    [0, 2],
    [2, 5],
  ] as const) {
    const block = {
      firstCycle: from,
      cycles: to - from,
      rows: packRows(layout, layout.outputs, rows.slice(from, to)),
    };
    for (const piece of table.rows(block)) text += new TextDecoder().decode(piece);
  }
  return `${new TextDecoder().decode(table.header())}${text}`.trimEnd().replaceAll('\n', ' ');
}

describe('a response of which a part is chosen', () => {
  it('has only every so manieth cycle', () => {
    expect(linesOf({ every: 3 })).toBe('cycle,y,v,z 0,0,0x01,0 3,x,0x03,1');
  });

  it('has only rows that differ from the one before, the first always', () => {
    expect(linesOf({ changes: true })).toBe(
      'cycle,y,v,z 0,0,0x01,0 1,0,0x01,1 2,0,0x03,1 3,x,0x03,1 4,0,0x03,1',
    );
    expect(linesOf({ changes: true, ports: ['z'] })).toBe('cycle,z 0,0 1,1');
    expect(linesOf({ changes: true, ports: ['y'] })).toBe('cycle,y 0,0 3,x 4,0');
  });

  it('has ports and parts of ports in the order asked for', () => {
    expect(linesOf({ ports: ['z', 'v[1:0]', 'y'], every: 2 })).toBe(
      'cycle,z,v[1:0],y 0,0,0x1,0 2,1,0x3,0 4,1,0x3,0',
    );
  });

  it('compares every so manieth row with the one written before', () => {
    expect(linesOf({ changes: true, every: 2 })).toBe('cycle,y,v,z 0,0,0x01,0 2,0,0x03,1');
  });

  it('is refused where it makes no sense', () => {
    expect(() => linesOf({ ports: ['q'] })).toThrow('no such port: q; there are y, v[6:0], z');
    expect(() => linesOf({ ports: ['y', 'y'] })).toThrow('y is named twice');
    expect(() => linesOf({ every: 0 })).toThrow('every is a whole number from 1 on, got 0');
  });
});
