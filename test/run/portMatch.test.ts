import { describe, expect, it } from 'vitest';
import { matchPorts } from '../../compiler/run/portMatch.js';
import { layoutOf } from '../support/tables.js';

const first = layoutOf(['a', 'v[3:0]'], ['y', 'w[7:0]'], { clocks: ['clk'] });

describe('matchPorts', () => {
  it('matches by name, wherever a port stands and whatever its indices are', () => {
    const second = layoutOf(['v[4:1]', 'a'], ['w[0:7]', 'z', 'y'], { clocks: ['clk'] });
    const match = matchPorts(first, second);
    expect(match.inputs).toEqual([
      { from: 0, to: 4, width: 1 },
      { from: 1, to: 0, width: 4 },
    ]);
    expect(match.outputs).toEqual([
      { from: 9, to: 0, width: 1 },
      { from: 0, to: 1, width: 8 },
    ]);
    expect(match.common.map(({ name }) => name)).toEqual(['y', 'w']);
    expect(match.differences).toEqual(['output z is not in the first']);
    expect(match.isUsable).toBe(true);
  });

  it('takes neighbours together', () => {
    const { inputs, outputs, differences } = matchPorts(first, first);
    expect(inputs).toEqual([{ from: 0, to: 0, width: 5 }]);
    expect(outputs).toEqual([{ from: 0, to: 0, width: 9 }]);
    expect(differences).toEqual([]);
  });

  it.each([
    [['a'], ['y'], 'input v is not in the second'],
    [['a', 'v[3:0]', 'b'], ['y'], 'input b is not in the first'],
    [['a', 'v[2:0]'], ['y'], 'input v has 4 bits in the first, 3 bits in the second'],
    [['a', 'v[3:0]'], ['y', 'w'], 'output w has 8 bits in the first, 1 bit in the second'],
    [['a', 'v[3:0]'], ['q'], 'output y is not in the second'],
  ])('has no use for inputs %s and outputs %s', (inputs, outputs, difference) => {
    const match = matchPorts(first, layoutOf(inputs, outputs, { clocks: ['clk'] }));
    expect(match.differences).toContain(difference);
    expect(match.isUsable).toBe(false);
  });

  it('tells of clocks that only one has, which is no hindrance', () => {
    const second = layoutOf(['a', 'v[3:0]'], ['y', 'w[7:0]'], { clocks: ['ck'] });
    const { differences, isUsable } = matchPorts(first, second);
    expect(differences).toEqual(['clock clk is not in the second', 'clock ck is not in the first']);
    expect(isUsable).toBe(true);
  });
});
