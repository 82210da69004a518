import { describe, expect, it } from 'vitest';
import { WorkFolder } from '../../support/command.js';

const folder = new WorkFolder({
  'top.v':
    'module top (input clk, output reg q); initial q = 0; always @(posedge clk) q <= ~q; endmodule\n',
});

describe('inspect on the command line', () => {
  it('draws a plot beside the page', async () => {
    const { status, stdout, stderr } = await folder.run(
      'inspect',
      'top.v',
      '--level-plot',
      'p.svg',
    );
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toMatch(/^top\n/);
    expect(stdout).not.toContain('\x1b');
    expect(folder.names()).toEqual(['p.svg', 'top.v']);
    expect(folder.read('p.svg')).toMatch(/^<svg .*<\/svg>\n$/s);
  });

  it('refuses a plot in a folder that is not there, and prints nothing else', async () => {
    const outcome = await folder.run('inspect', 'top.v', '--json', '--level-plot', 'no/p.svg');
    expect(outcome).toEqual({
      status: 2,
      stdout: '',
      stderr: 'error: no/p.svg cannot be written: there is no folder no\n',
    });
  });
});
