import { describe, expect, it } from 'vitest';
import { WorkFolder } from '../support/command.js';
import { accumulator, chain } from './netlists.js';

const folder = new WorkFolder({
  'sum.v': accumulator,
  'chain.bench': chain,
  'comma.v': 'module comma (input a;\nendmodule\n',
  'unknown.v': 'module outer (input a, output y);\n  part p (a, y);\nendmodule\n',
  'kind.bench': 'INPUT(a)\nOUTPUT(a)\ny = MAYBE(a)\n',
  'notes.txt': 'nothing\n',
  'column.csv': 'step,speed\n1,2\n',
  'clock.csv': 'step,clk\n1,0\n',
  'large.csv': 'step\n1\n16\n',
  'word.csv': 'step,clear\n1,0\n2,maybe\n',
  'short.csv': 'step,clear\n1\n',
  'quote.csv': 'step\n"1\n',
  'backwards.csv': 'cycle,total\n1,0\n0,0\n',
  'nosuch.csv': 'cycle,sum\n',
});
const names = folder.names();

const run = ['run', 'sum.v', '--engine', 'bytecode', '--response', 'out.csv'];
const held = [...run, '--cycles', '3'];

describe('a wrong input', () => {
  it.each([
    ['a netlist that breaks the grammar', ['run', 'comma.v', ...held.slice(2)], 'comma.v:1:22: '],
    ['a module that no file defines', ['run', 'unknown.v', ...held.slice(2)], 'unknown.v:2:3: '],
    ['an unknown kind of gate', ['inspect', 'kind.bench', '--json'], 'kind.bench:3:5: '],
    ['an unknown form of file', ['inspect', 'notes.txt'], 'notes.txt:1:1: '],
    ['a second file beside a .bench', ['inspect', 'chain.bench', 'sum.v'], 'chain.bench:1:1: '],
    ['a stimulus for no port', [...run, '--stimulus', 'column.csv'], 'column.csv:1:6: '],
    [
      'a stimulus for a clock',
      [...run, '--stimulus', 'clock.csv'],
      'clock.csv:1:6: clk is a clock',
    ],
    ['a value too large for its port', [...run, '--stimulus', 'large.csv'], 'large.csv:3:1: step '],
    ['a value that is none', [...run, '--stimulus', 'word.csv'], 'word.csv:3:3: clear is maybe'],
    ['a row that lacks a field', [...run, '--stimulus', 'short.csv'], 'short.csv:2:2: '],
    ['a quote left open', [...run, '--stimulus', 'quote.csv'], 'quote.csv:2:1: '],
    ['cycles that go back', [...held, '--expect', 'backwards.csv'], 'backwards.csv:3:1: '],
    ['an expectation of no port', [...held, '--expect', 'nosuch.csv'], 'nosuch.csv:1:7: '],
    ['a missing netlist', ['run', 'absent.v', ...held.slice(2)], 'error: absent.v '],
    ['a missing stimulus', [...run, '--stimulus', 'absent.csv'], 'error: absent.csv '],
    [
      'a stimulus that is a folder',
      [...run, '--stimulus', '.'],
      'error: . cannot be used: it is a d',
    ],
    ['a missing expectation', [...held, '--expect', 'absent.csv'], 'error: absent.csv '],
    [
      'a response in no folder',
      [...held.slice(0, 4), '--cycles', '1', '--response', 'a/b'],
      'error: a/b cannot be used: there is no folder a\n',
    ],
    ['a top that is none', [...held, '--top', 'summit'], 'sum.v:1:'],
  ])('is refused with its place and nothing else: %s', async (_, args, beginning) => {
    const { status, stdout, stderr } = await folder.run(...args);
    expect(stderr.slice(0, beginning.length)).toBe(beginning);
    expect(status).toBe(2);
    expect(stdout).toBe('');
    // One message: what follows its line is the netlist's line and a caret.
    expect(stderr).toMatch(/^.+\n( {4}.*\n {4} *\^\n)?$/);
    expect(folder.names()).toEqual(names);
  });

  it('has all its problems told at once', async () => {
    folder.write('two.bench', 'INPUT(a)\nOUTPUT(y)\ny = OR(a, b)\nz = AND(a, c)\n');
    const { status, stderr } = await folder.run('inspect', 'two.bench');
    expect(status).toBe(2);
    const places = stderr.split('\n').filter((line) => line.startsWith('two.bench:'));
    expect(places.map((line) => line.split(' ')[0])).toEqual([
      'two.bench:3:11:',
      'two.bench:4:12:',
    ]);
  });
});

describe('a wrong request', () => {
  it.each([
    ['an unknown option', [...held, '--quick'], '--quick'],
    ['an unknown verb', ['levitate', 'sum.v'], 'levitate'],
    ['no netlist', ['run'], 'netlist'],
    ['no length', run, '--cycles'],
    ['random bits without a length', [...run, '--random', '1'], '--cycles'],
    ['a length that is no number', [...run, '--cycles', 'many'], 'many'],
    ['a length that is blank', [...run, '--cycles', ' '], 'whole number'],
    [
      'a stimulus and random bits',
      [...held, '--random', '1', '--stimulus', 'large.csv'],
      '--random',
    ],
    ['an unknown engine', [...held.slice(0, 2), '--cycles', '1', '--engine', 'steam'], 'wasm'],
    ['an unknown power-up', [...held, '--power-up', 'slowly'], 'random'],
    ['a seed that is no number', [...held, '--seed', 'oak'], 'oak'],
  ])('is refused in one line: %s', async (_, args, word) => {
    const { status, stdout, stderr } = await folder.run(...args);
    expect(stderr).toMatch(/^error: .+\n$/);
    expect(stderr).toContain(word);
    expect(status).toBe(2);
    expect(stdout).toBe('');
    expect(folder.names()).not.toContain('out.csv');
  });
});

describe('a cycle without result', () => {
  it('is refused with its number, the loop and its line, and leaves no response', async () => {
    folder.write('ring.bench', 'INPUT(a)\nOUTPUT(y)\ny = NAND(a, y)\n');
    folder.write('ring.csv', 'a,@cycles\n0,5\n1,\n');
    for (const engine of ['bytecode', 'reference']) {
      const args = ['ring.bench', '--stimulus', 'ring.csv', '--response', 'out.csv'];
      const { status, stderr } = await folder.run('run', ...args, '--engine', engine);
      expect(stderr).toMatch(/cycle 5 .*: y \(ring\.bench:3\)\n$/);
      expect(status).toBe(2);
      expect(folder.names()).not.toContain('out.csv');
    }
  });
});
