import { describe, expect, it } from 'vitest';
import { rowStride } from '../../../runtime/layout.js';
import { readStimulus } from '../../../runtime/node/index.js';
import { rowAt, stimulusOf, TableProblem } from '../../../runtime/page/stimulus.js';
import { WorkFolder } from '../../support/command.js';
import { layoutOf } from '../../support/tables.js';

const work = new WorkFolder();

const tables: readonly (readonly [string, string])[] = [
  ['whole ports', 'a,v\n1,0xff\n0,17\n,0b101\n'],
  ['parts of ports', 'v[3],v[7:4],w[0:1]\n1,0xa,3\n0,,0\n'],
  ['lasting rows', 'a,@cycles\n1,3\n0,\n1,2'],
  ['quotes, carriage returns and a mark in front', '\ufeff"a","v"\r\n"1","0x1f"\r\n,"3"\r\n'],
];

describe.each([false, true])('a stimulus table read in the page (x: %s)', (threeValued) => {
  const layout = layoutOf(['a', 'v[7:0]', 'w[0:39]'], [], { threeValued });
  const stride = rowStride(layout.inputs, threeValued);
  const shape = { inputWords: stride, outputWords: 0, threeValued };
  const unknown: (readonly [string, string])[] = threeValued
    ? [['x digits', 'a,v\nx,0b1x0\nz,0xx1\n']]
    : [];

  it.each([...tables, ...unknown])('gives the rows that a run reads: %s', async (name, text) => {
    const own = stimulusOf('t.csv', text, layout.inputs.ports, shape);
    const file = work.write(`${threeValued} ${name}.csv`, text);
    let cycle = 0;
    for await (const block of readStimulus(`${work.path}/${file}`, layout)) {
      for (let i = 0; i < block.cycles; i++, cycle++) {
        const expected = block.rows.slice(i * block.stride, i * block.stride + stride);
        const at = rowAt(own, cycle) * stride;
        expect(own.rows.slice(at, at + stride), `cycle ${cycle}`).toEqual(expected);
      }
    }
    expect(own.cycles).toBe(cycle);
  });

  it.each([
    ['', 't.csv: the table is empty'],
    ['a,v\n', 't.csv:1: no row follows the header'],
    ['b\n1\n', 't.csv:1: there is no input b; there are: a, v, w'],
    ['v[9]\n1\n', 't.csv:1: v[9] is not within [7:0]'],
    ['a\n1,0\n', 't.csv:2: 2 fields, expected 1'],
    ['a\n2\n', 't.csv:2: a takes a value of 1 bits, got 2'],
    ['v\n1\n0x100\n', 't.csv:3: v takes a value of 8 bits, got 0x100'],
    ['a,@cycles\n1,0\n', 't.csv:2: @cycles takes a count from 1 on, got 0'],
    ['a\n"1\n', 't.csv:2: a quote is not closed'],
  ])('tells what is wrong in %j', (text, message) => {
    expect(() => stimulusOf('t.csv', text, layout.inputs.ports, shape)).toThrow(
      new TableProblem(message),
    );
  });
});
