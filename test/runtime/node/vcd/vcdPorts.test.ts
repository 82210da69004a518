import { describe, expect, it } from 'vitest';
import { vcdStimulus } from '../../../../runtime/node/vcd/vcdStimulus.js';
import { rowsOf } from '../../../support/stimulusRows.js';
import { bytesOf, layoutOf } from '../../../support/tables.js';

const layout = layoutOf(['d', 'v[3:0]', 'up[0:2]'], []);

/** Replays declarations (a line `scope:` opens one, `^` closes it) and changes at time 0. */
async function replay(lines: string, changes: string, scope?: string) {
  const header = lines
    .trim()
    .split('\n')
    .map((line) => {
      const text = line.trim();
      if (text === '^') return '$upscope $end';
      if (text.endsWith(':')) return `$scope module ${text.slice(0, -1)} $end`;
      return `$var wire ${text} $end`;
    });
  const source = await vcdStimulus('p.vcd', layout, {
    bytes: bytesOf(`${header.join('\n')}\n$enddefinitions $end\n#0 ${changes}\n`),
    ...(scope !== undefined && { scope }),
  });
  return { rows: await rowsOf(source.blocks(), layout), notes: source.notes() };
}

const none: readonly string[] = [];

describe('ports in a value change dump', () => {
  it('are found with their range joined to the name, apart from it, or without one', async () => {
    const { rows, notes } = await replay('1 a d\n4 b v[3:0]\n3 c up [0:2]', '1a b1000 b b110 c');
    expect({ rows, notes }).toEqual({ rows: ['1 1000 110'], notes: none });
    expect((await replay('1 a d\n4 b v\n3 c up', '1a b1000 b b110 c')).rows).toEqual(rows);
  });

  it('may be recorded bit by bit and in parts, by declared index', async () => {
    const { rows } = await replay(
      '1 a d\n1 b v [3]\n2 e v[2:1]\n1 f v[0]\n1 g up[0]\n1 h up[1]\n1 i up[2]',
      '0a 1b b01 e 0f 1g 0h 0i',
    );
    expect(rows).toEqual(['0 1010 100']);
  });

  it('are taken from the scope that has most of them', async () => {
    const { rows } = await replay(
      'bench:\n1 a d\nblock:\n1 b d\n4 c v [3:0]\n3 e up [0:2]\n^\n^',
      '0a 1b b1 c b1 e',
    );
    expect(rows).toEqual(['1 0001 001']);
  });

  it('are taken from the highest scope where several have as many', async () => {
    const block = '1 b d\n4 c v [3:0]\n3 e up [0:2]';
    const { rows } = await replay(
      `bench:\n1 a d\n4 f v [3:0]\n3 g up [0:2]\nblock:\n${block}\n^\n^`,
      '1a b1 f b1 g 0b b0 c b0 e',
    );
    expect(rows).toEqual(['1 0001 001']);
  });

  it('are taken from elsewhere where that scope lacks one and only one other has it', async () => {
    const { rows, notes } = await replay(
      'bench:\n1 a d\n4 c v [3:0]\n^\npads:\n3 e up [0:2]\n^',
      '1a b1 c b111 e',
    );
    expect({ rows, notes }).toEqual({ rows: ['1 0001 111'], notes: none });
  });

  it('are held at 0 where they are nowhere, or in several places, which a note tells', async () => {
    const { rows, notes } = await replay(
      'bench:\n1 a d\n4 c v [3:0]\n^\npads:\n3 e up [0:2]\n^\npins:\n3 f up [0:2]\n^',
      '1a b1 c b111 e b111 f',
    );
    expect(rows).toEqual(['1 0001 000']);
    expect(notes).toEqual(['p.vcd has no variable for up, held at 0']);
  });

  it('are the same port in several scopes where the code is the same', async () => {
    const { rows } = await replay('one:\n1 a d\n^\ntwo:\n1 a d\n^', '1a');
    expect(rows).toEqual(['1 0000 000']);
  });

  it('must be chosen by scope where several are as good', async () => {
    const lines = 'one:\n1 a d\n^\ntwo:\n1 b d\n^';
    await expect(replay(lines, '1a 0b')).rejects.toThrow(
      'p.vcd: the ports are in several scopes: one, two; choose one with --stimulus-scope',
    );
    expect((await replay(lines, '1a 0b', 'two')).rows).toEqual(['0 0000 000']);
    await expect(replay(lines, '1a 0b', 'three')).rejects.toThrow(
      'p.vcd: scope three has no port of the circuit; these have: one, two',
    );
  });

  it('must have their width', async () => {
    await expect(replay('8 a v', 'b1 a')).rejects.toThrow(
      'p.vcd: v[3:0] has 8 bits in the recording',
    );
    await expect(replay('1 a v[4]', '1a')).rejects.toThrow('p.vcd: v[4] is outside v[3:0]');
  });

  it('must be there at all', async () => {
    await expect(replay('8 a w', 'b1 a')).rejects.toThrow(
      'p.vcd: no variable here has the name of an input: d, v, up',
    );
  });
});
