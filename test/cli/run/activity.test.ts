import { describe, expect, it } from 'vitest';
import { readSaif } from '../../activity/readSaif.js';
import { WorkFolder } from '../../support/command.js';

const door = `module door (input clk, open, output reg [1:0] state = 0, output never);
  always @(posedge clk) state <= open ? {state[0], 1'b1} : 2'b0;
  assign never = state == 2;
endmodule
`;
const folder = new WorkFolder({ 'door.v': door, 'open.csv': 'open,@cycles\n0,4\n1,5\n0,3\n' });
const run = (...args: string[]) =>
  folder.run('run', 'door.v', '--stimulus', 'open.csv', '--engine', 'bytecode', ...args);

describe('run', () => {
  it('counts activity and follows states', async () => {
    const { status, stdout, stderr } = await run(
      ...['--activity', 'door.saif', '--activity-picture', 'door.svg', '--states', 'state'],
      ...['--states-table', 'states.csv', '--states-graph', 'states.dot'],
    );
    expect([status, stderr]).toEqual([0, '']);
    // The door is open in cycles 4 to 8: state is 1 in cycle 5, 3 in 6 to 9, and 0 otherwise.
    expect(stdout.split('\n').slice(1)).toEqual([
      'activity: 6 toggles of 4 nets in 12 cycles, 0.125 per net and cycle; clocks apart',
      '  busiest nets: open 2, state[0] 2, state[1] 2',
      '  never toggled: 1: never',
      'state: 3 states, 5 transitions',
      '  state  first cycle  cycles  next: times (first cycle)',
      '  0x0              0       7  0x0: 5 (1), 0x1: 1 (5)',
      '  0x1              5       1  0x3: 1 (6)',
      '  0x3              6       4  0x3: 3 (7), 0x0: 1 (10)',
      '',
    ]);
    const { nets } = readSaif(folder.read('door.saif'));
    expect(nets.get('door.state[1]')).toEqual({ T0: 16, T1: 8, TX: 0, TC: 2, IG: 0 });
    expect(folder.read('door.svg')).toContain('Activity of door');
    expect(folder.read('states.csv')).toContain('state,0x1,0x3,1,6\n');
    expect(folder.read('states.dot')).toContain('r0s1 -> r0s2');
  });

  it('says both as JSON', async () => {
    const { stdout } = await run('--activity', 'door.csv', '--states', 'state[0]', '--json');
    const { activity, states } = JSON.parse(stdout);
    expect(activity.toggles).toBe(6);
    expect(states[0].register).toBe('state[0]');
    expect(states[0].transitions).toHaveLength(4);
  });

  it.each([
    [['--activity', 'door.txt'], '--activity door.txt: the ending tells the form'],
    [['--activity', 'none/door.saif'], 'none/door.saif'],
    [['--states', 'stat'], '--states stat: no signal has such a name'],
    [['--states', '{state,}'], '--states {state,}: a name is missing'],
    [['--states', 'state', '--states-graph', 'door.png'], '--states-graph door.png: the ending'],
    [['--states-table', 'door.csv2'], '--states-table is for --states REGISTERS'],
  ])('refuses %s in one line', async (args, message) => {
    const before = folder.names();
    const { status, stdout, stderr } = await run(...args);
    expect([status, stdout]).toEqual([2, '']);
    expect(stderr).toContain(message);
    expect(stderr.trimEnd().split('\n')).toHaveLength(1);
    expect(folder.names()).toEqual(before);
  });
});
