import { Command } from 'commander';
import { describe, expect, it } from 'vitest';
import { addClockOption } from '../../compiler/cli/clockOption.js';
import { argumentsOf } from '../../compiler/cli/firstAnswer.js';
import { addNetlistOptions } from '../../compiler/cli/netlists.js';

const parsed = (args: readonly string[]) => {
  const command = addClockOption(addNetlistOptions(new Command())).exitOverride();
  return command.parse(['net.v', ...args], { from: 'user' }).opts();
};

describe('argumentsOf', () => {
  it('writes netlist and clock options as they are read', () => {
    const args = [
      ...['--top', 'main', '--define', 'WIDTH=8', '--define', 'FAST', '--include', 'a'],
      ...['--include', 'b', '--replace', 'm=other.v', '--black-box', 'x', '--black-box', 'y'],
      ...['--memories-from', '64', '--clock', 'clk=4', '--clock', 'bus=6@1'],
    ];
    const options = parsed(args);
    expect(Object.keys(options).length).toBeGreaterThan(6);
    expect(parsed(argumentsOf(options))).toEqual(options);
    expect(argumentsOf(parsed([]))).toEqual([]);
  });
});
