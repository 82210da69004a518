import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../../runtime/layout.js';
import {
  type VcdClock,
  type VcdOptions,
  vcdStimulus,
} from '../../../../runtime/node/vcd/vcdStimulus.js';
import { rowsOf } from '../../../support/stimulusRows.js';
import { bytesOf, layoutOf } from '../../../support/tables.js';

// The form is that of IEEE 1364-2005, clause 18 (18.2.1 syntax, 18.2.2 values, 18.2.3 keywords).

const inputs = ['clear', 'step[3:0]'];
const two = layoutOf(inputs, [], { clocks: ['clk'] });
const three = layoutOf(inputs, [], { clocks: ['clk'], threeValued: true });
const clk: VcdClock = {
  port: { name: 'clk', width: 1, msb: 0, lsb: 0, isVector: false },
  bit: 0,
  active: 1,
};

const declarations = `
$date today $end
$timescale 1 ns $end
$scope module bench $end
$var reg 1 ! clk $end
$var reg 1 " clear $end
$var wire 4 # step [3:0] $end
$var real 64 % load $end
$upscope $end
$enddefinitions $end
`;

async function replay(
  text: string,
  layout: ModelLayout = two,
  options: VcdOptions = { clocks: [clk] },
  pieceLength?: number,
): Promise<{ rows: string[]; notes: readonly string[] }> {
  const source = await vcdStimulus('r.vcd', layout, {
    ...options,
    bytes: bytesOf(text, pieceLength),
  });
  const rows = await rowsOf(source.blocks(), layout);
  return { rows, notes: source.notes() };
}

const rowsIn = async (changes: string, layout?: ModelLayout): Promise<string[]> =>
  (await replay(declarations + changes, layout)).rows;

describe('vcdStimulus', () => {
  it('gives what the inputs are just before each rising edge of the clock', async () => {
    const rows = await rowsIn(`
#0 $dumpvars 0! 1" b0 # r1.5 % $end
#5 1!
#7 b101 #
#10 0!
#15 1! 0" b11 #
#20 0!
#25 1!`);
    expect(rows).toEqual(['1 0000', '1 0101', '0 0011']);
  });

  it('takes an edge to 0 where that is the active one', async () => {
    const options = { clocks: [{ ...clk, active: 0 as const }] };
    const text = `${declarations}#0 1! 0" b1 #\n#5 0!\n#10 1! b10 #\n#15 0!`;
    expect((await replay(text, two, options)).rows).toEqual(['0 0001', '0 0010']);
  });

  it('sees no edge in the first value of a clock, in a pulse of no length and around x', async () => {
    expect(await rowsIn('#0 1! 0" b1 #\n#5 0!\n#10 1!')).toEqual(['0 0001']);
    expect(await rowsIn('#0 0! 0" b1 #\n#5 1! 0!\n#10 1!')).toEqual(['0 0001']);
    expect(await rowsIn('#0 0! 0" b1 #\n#5 x!\n#10 0!\n#15 z!\n#20 1!')).toEqual(['0 0001']);
  });

  it('takes changes of one time together, however often the time is written', async () => {
    expect(await rowsIn('#0 0! 0" b1 #\n#5 1!\n#5 b1000 #\n#5 0!\n#7 1!')).toEqual(['0 1000']);
  });

  it('extends values to the left: 0 and 1 with 0, x with x, z with z', async () => {
    const changes =
      '#0 0! 0" b1 #\n#1 1!\n#2 0! bx1 #\n#3 1!\n#4 0! bz #\n#5 1!\n#6 0! b0x #\n#7 1!';
    expect(await rowsIn(changes, three)).toEqual(['0 0001', '0 xxx1', '0 xxxx', '0 000x']);
  });

  it('reads capital letters, comments, and words in any lines', async () => {
    expect(await rowsIn('#0 0!\nX" B1Z\n#\n$comment b1 # 1! $end\n#5 1!', three)).toEqual([
      'x 001x',
    ]);
  });

  it('takes x as 0 in a two-valued run, and says so once', async () => {
    const text = `${declarations}#0 0!\n#5 1!\n#6 0! 1"\n#7 1!\n#8 0! b0 #\n#9 1!`;
    const { rows, notes } = await replay(text);
    expect(rows).toEqual(['0 0000', '1 0000', '1 0000']);
    expect(notes).toEqual([
      'inputs are x or z in 2 cycles of the recording, first clear, step at cycle 0; they are taken ' +
        'as 0. With --power-up unknown they stay x',
    ]);
  });

  it('says where the recording pauses, and takes no edge from that', async () => {
    const text = `${declarations}#0 0! 0" b1 #\n#5 1!\n#6 $dumpoff x! x" bx # $end
#50 $dumpon 0! 0" b10 # $end\n#55 1!`;
    const { rows, notes } = await replay(text);
    expect(rows).toEqual(['0 0001', '0 0010']);
    expect(notes).toEqual(['the recording pauses once, first at time 6; its cycles are missing']);
  });

  it('makes every time with a change a cycle where the clock is not there', async () => {
    const text = `${declarations.replace('clk', 'tick')}$dumpvars 0! 0" b1 # $end
#0\n#10 b10 #\n#20\n#30 1!\n#40 1"`;
    const { rows, notes } = await replay(text);
    expect(rows).toEqual(['0 0001', '0 0010', '0 0010', '1 0010']);
    expect(notes).toEqual([expect.stringContaining('has no clock clk')]);
  });

  it('cuts time into periods where one is given', async () => {
    const text = `${declarations}#0 0" b1 #\n#9 b10 #\n#10 b11 #\n#35 b100 #`;
    for (const period of ['10', '10ns', '0.01us', '10000 ps']) {
      const { rows } = await replay(text, two, { period });
      expect(rows).toEqual(['0 0010', '0 0011', '0 0011', '0 0100']);
    }
  });

  it('refuses a period that is no whole number of units', async () => {
    const refused = (period: string) => replay(declarations, two, { period });
    await expect(refused('1500ps')).rejects.toThrow(
      "r.vcd: a period of 1500ps is no whole number of the file's time units",
    );
    await expect(refused('soon')).rejects.toThrow('r.vcd: soon is no period; give such as 10ns');
    const bare = replay(declarations.replace(/\$timescale.*/, ''), two, { period: '10ns' });
    await expect(bare).rejects.toThrow('the file has no timescale');
  });

  it('replays what was written, in pieces of any length', async () => {
    const cycle = fc.record({ clear: fc.boolean(), step: fc.nat(15), late: fc.boolean() });
    await fc.assert(
      fc.asyncProperty(
        fc.array(cycle, { maxLength: 40 }),
        fc.integer({ min: 1, max: 70 }),
        async (cycles, length) => {
          let text = `${declarations}#0 $dumpvars 0! 0" b0 # $end\n`;
          cycles.forEach(({ clear, step, late }, k) => {
            // Late: together with the edge before. Else some time after it.
            text += late && k > 0 ? '' : `#${10 * k + 12}\n`;
            text += `${Number(clear)}"\nb${step.toString(2)} #\n#${10 * k + 17}\n0!\n#${10 * k + 20}\n1!\n`;
          });
          const { rows } = await replay(text, two, undefined, length);
          const expected = cycles.map(
            ({ clear, step }) => `${Number(clear)} ${step.toString(2).padStart(4, '0')}`,
          );
          expect(rows).toEqual(expected);
        },
      ),
      { seed: 7, numRuns: 60 },
    );
  });
});

describe('a value change dump that is wrong', () => {
  it.each([
    ['#0 0! 2"', 'r.vcd:11:7: no value change: 2"'],
    ['#0 0! b12 #', 'r.vcd:11:7: b12 is no value for a port; it has digits 0, 1, x and z'],
    ['#0 0! r1.5 #', 'r.vcd:11:7: r1.5 is no value for a port; it has digits 0, 1, x and z'],
    ['#0 0! b101', 'r.vcd:11:7: the code of a variable is missing'],
    ['#0 0! 1', 'r.vcd:11:7: the code of a variable is missing'],
    ['#x', 'r.vcd:11:1: a time is a number from 0 on'],
    ['#10\n#9', 'r.vcd:12:1: time 9 comes after time 10'],
    ['#0 $scope', 'r.vcd:11:4: $scope cannot stand among value changes'],
  ])('is refused at its place: %s', async (changes, message) => {
    await expect(replay(declarations + changes)).rejects.toThrow(message);
    await expect(replay(declarations + changes, two, { clocks: [clk] }, 3)).rejects.toThrow(
      message,
    );
  });

  it.each([
    ['', 'r.vcd:1:1: the declarations are not closed'],
    ['a,b\n1,2\n', 'r.vcd:1:1: expected a declaration, got a,b'],
    ['$var wire 1 ! clear', 'r.vcd:1:15: $var is not closed by $end'],
    ['$var wire 0 ! clear $end', 'r.vcd:1:21: a variable has a type, a size, a code and a name'],
    ['$timescale 3 ns $end', 'r.vcd:1:17: no timescale: 3ns; expected such as 10 ns'],
  ])('is refused in its declarations: %s', async (text, message) => {
    await expect(replay(text)).rejects.toThrow(message);
  });
});

describe('codes', () => {
  it('of any length are told apart', async () => {
    const codes = ['!', '!!', '!!!', '!"#$', '!"#%', '!"#$%&()', '!"#$%&()*', '~~~~~~~~~~~'];
    const layout = layoutOf(
      codes.map((_, i) => `p${i}`),
      [],
    );
    const header = codes.map((code, i) => `$var wire 1 ${code} p${i} $end\n`).join('');
    const changes = codes.map((code, i) => `#${i}\n1${code}\n`).join('');
    const zeros = codes.map((code) => `0${code}\n`).join('');
    const source = await vcdStimulus('c.vcd', layout, {
      bytes: bytesOf(`${header}$enddefinitions $end\n${zeros}${changes}`),
    });
    const rows = await rowsOf(source.blocks(), layout);
    expect(rows).toEqual(codes.map((_, i) => codes.map((_, j) => (j <= i ? '1' : '0')).join(' ')));
  });
});
