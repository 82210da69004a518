import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { Inspection } from '../../compiler/report/inspection.js';
import { WorkFolder } from '../support/command.js';
import { accumulator, chain, mixed } from './netlists.js';

const folder = new WorkFolder({
  'mixed.v': mixed,
  'chain.bench': chain,
  'accumulator.v': accumulator,
});

describe('inspect', () => {
  it('prints the structure of a netlist as JSON', async () => {
    const { status, stdout, stderr } = await folder.run('inspect', 'mixed.v', '--json');
    expect(stderr).toBe('');
    expect(status).toBe(0);
    const inspection = JSON.parse(stdout) as Inspection;
    expect(inspection).toMatchObject({
      top: 'mixed',
      inputs: [
        { name: 'rst', width: 1 },
        { name: 'd', width: 2 },
        { name: 'en', width: 1 },
        { name: 'sn', width: 1 },
        { name: 'rn', width: 1 },
      ],
      outputs: [
        { name: 'q', width: 2 },
        { name: 'held', width: 1 },
        { name: 'flag', width: 1 },
      ],
      clocks: [{ port: 'clk', registers: 2 }],
      gates: 4,
      registers: 2,
      latches: 1,
      loops: 1,
      depth: 2,
    });
    expect(inspection.problems).toEqual([
      {
        severity: 'warning',
        code: 'combinational-loop',
        message: expect.stringMatching(/^2 nets feed back .*flag \(mixed\.v:23\), back/),
        file: 'mixed.v',
        line: 23,
        column: 3,
      },
    ]);
  });

  it('unpacks netlists and refuses those that are no whole gzip files', async () => {
    const packed = gzipSync(mixed);
    folder.write('mixed.v.gz', packed);
    folder.write('cut.v.gz', packed.subarray(0, 40));
    const plain = await folder.run('inspect', 'mixed.v');
    const { stdout, status } = await folder.run('inspect', 'mixed.v.gz');
    expect(status).toBe(0);
    expect(stdout.replaceAll('mixed.v.gz', 'mixed.v')).toBe(plain.stdout);
    const cut = await folder.run('inspect', 'cut.v.gz');
    expect(cut.status).toBe(2);
    expect(cut.stderr).toBe(
      'error: cut.v.gz cannot be read: it is no whole gzip file [file-unreadable]\n',
    );
  });

  it('prints the same as a page of text', async () => {
    const { status, stdout } = await folder.run('inspect', 'mixed.v');
    expect(status).toBe(0);
    const lines = stdout.split('\n');
    expect(lines[0]).toBe('mixed');
    const rows = lines.map((line) => line.trim().replace(/ {2,}/, ': '));
    expect(rows).toContain('inputs: 5 (6 bits): rst, d:2, en, sn, rn');
    expect(rows).toContain('outputs: 3 (4 bits): q:2, held, flag');
    expect(rows).toContain('clocks: clk (2 registers)');
    expect(rows).toContain('registers: 2');
    expect(rows).toContain('latches: 1');
    expect(rows).toContain('loops: 1');
    expect(rows).toContain('depth: 2 levels of gates');
    expect(rows.find((row) => row.startsWith('gates: 4: '))).toContain('2 nand');
    expect(stdout).toMatch(/^ {4}mixed\.v:23:3: warning: .* \[combinational-loop\]$/m);
  });

  it('reads the ISCAS text form, and adds its clock', async () => {
    const { status, stdout } = await folder.run('inspect', 'chain.bench', '--json');
    expect(status).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({
      top: 'chain',
      inputs: [{ name: 'd', width: 1 }],
      clocks: [{ port: 'clock', registers: 16 }],
      gates: 0,
      registers: 16,
      depth: 0,
    });
  });

  it('takes several files as one design, and the top module that --top names', async () => {
    const { status, stdout } = await folder.run(
      ...['inspect', 'accumulator.v', 'mixed.v', '--top', 'accumulator', '--json'],
    );
    expect(status).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({ top: 'accumulator', registers: 8, problems: [] });
  });

  it('finds macros and included files where the command line says', async () => {
    folder.write('width.vh', '`define HIGH 6\n');
    const netlist = `\`include "width.vh"
      module bus (a, y); input [\`HIGH:0] a; output [\`LOW:0] y; assign y = a; endmodule`;
    folder.write('bus.v', netlist);
    const { status, stdout } = await folder.run(
      ...['inspect', 'bus.v', '--define', 'LOW=6', '--include', '.', '--json'],
    );
    expect(status).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({ inputs: [{ name: 'a', width: 7 }], clocks: [] });
  });
});
