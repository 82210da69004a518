import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { circuitOf, evaluate, gatesOf, netsOf, portsOf, reading, signalValue } from './reading.js';

/** Values of `y` for all values of some one-bit inputs, the first of them the highest bit. */
function column(text: string, inputs: readonly string[]): string {
  const circuit = circuitOf(text);
  return Array.from({ length: 1 << inputs.length }, (_, levels) => {
    const values = inputs.map((name, i) => [name, (levels >> (inputs.length - 1 - i)) & 1]);
    return signalValue(circuit, 'y', Object.fromEntries(values));
  }).join('');
}

const checksOf = (text: string): string[] =>
  reading(text).circuit!.checks.map(({ kind, name }) => `${kind} ${name}`);

describe('tri-state gates', () => {
  // IEEE 1364-2005, clause 7.4, table 7-5, for known values of the data and the control.
  it.each([
    ['bufif0', '0x1x'],
    ['bufif1', 'x0x1'],
    ['notif0', '1x0x'],
    ['notif1', 'x1x0'],
    // Clause 7.5, table 7-6.
    ['nmos', 'x0x1'],
    ['pmos', '0x1x'],
    ['rnmos', 'x0x1'],
    ['rpmos', '0x1x'],
  ])('%s drives as its table says', (word, expected) => {
    const text = `module t (input d, c, output y); ${word} (y, d, c); endmodule`;
    expect(column(text, ['d', 'c'])).toBe(expected);
  });

  it.each(['cmos', 'rcmos'])('%s is on where one of its controls is', (word) => {
    const text = `module t (input d, n, p, output y); ${word} (y, d, n, p); endmodule`;
    expect(column(text, ['d', 'n', 'p'])).toBe('0x001x11');
  });

  it('in arrays each have their bits', () => {
    const circuit = circuitOf(`module t (input [3:0] d, input e, output [3:0] y);
      tri0 [3:0] y; bufif1 g [3:0] (y, d, e); endmodule`);
    expect(signalValue(circuit, 'y', { d: 0b1010, e: 1 })).toBe(0b1010);
    expect(signalValue(circuit, 'y', { d: 0b1010, e: 0 })).toBe(0);
  });

  it('share a net', () => {
    const text = `module t (input a, b, p, q, output y);
      bufif1 (y, a, p); bufif1 (y, b, q); endmodule`;
    expect(column(text, ['p', 'q', 'a', 'b'])).toBe('xxxx' + '0101' + '0011' + '0xx1');
    expect(checksOf(text)).toEqual(['conflict y', 'float y']);
  });

  it('share a net with a gate', () => {
    const text = `module t (input a, b, q, output y);
      buf (y, a); bufif1 (y, b, q); endmodule`;
    expect(column(text, ['q', 'a', 'b'])).toBe('0011' + '0xx1');
    expect(checksOf(text)).toEqual(['conflict y']);
  });

  it('share a net with a register, which keeps its name', () => {
    const circuit = circuitOf(`module t (input clk, a, q, output y);
      reg r; always @(posedge clk) r <= a;
      assign y = r; bufif1 (y, ~r, q); endmodule`);
    expect(circuit.registers.count).toBe(1);
    expect(signalValue(circuit, 'y', { q: 1 }, new Map([[netsOf(circuit, 'r')[0]!, 0]]))).toBe('x');
  });
});

describe('assignments of z', () => {
  it.each([
    ['the last branch', "e ? d : 1'bz", 'xx01'],
    ['the first branch', "e ? 'bz : d", '01xx'],
    ['an inner branch', "d ? (e ? d : 1'bz) : 1'b0", '0x01'],
    ['a chain', "e ? d : ~e & d ? 1'b1 : 1'bz", 'x101'],
    ['a concatenation', "{e ? d : 1'bz}", 'xx01'],
    ['a replication', "e ? d : {1{1'bz}}", 'xx01'],
  ])('in %s drive under the condition', (_, value, expected) => {
    const text = `module t (input e, d, output y); assign y = ${value}; endmodule`;
    expect(column(text, ['e', 'd'])).toBe(expected);
  });

  it('fill the width of the target', () => {
    const circuit = circuitOf(`module t (input e, input [7:0] d, output [7:0] y, z);
      tri1 [7:0] y, z;
      assign y = e ? d : 'bz;
      assign z = e ? d : 8'bz;
    endmodule`);
    expect(signalValue(circuit, 'y', { e: 0, d: 0 })).toBe(0xff);
    expect(signalValue(circuit, 'z', { e: 0, d: 0 })).toBe(0xff);
    expect(signalValue(circuit, 'z', { e: 1, d: 0x5a })).toBe(0x5a);
  });

  // Clause 5.4: a number with a width is extended by zeros, not by its z.
  it('do not fill beyond a number that has a width', () => {
    const circuit = circuitOf(`module t (input e, input [3:0] d, output [3:0] y);
      tri1 [3:0] y; assign y = e ? d : 1'bz; endmodule`);
    expect(signalValue(circuit, 'y', { e: 0, d: 15 })).toBe(1);
  });

  it('hold for each bit of a number and a concatenation by itself', () => {
    const circuit = circuitOf(`module t (input e, input [1:0] d, output [3:0] y);
      tri1 [3:0] y; assign y = {e ? d : 2'bz, 2'b0z}; endmodule`);
    expect(signalValue(circuit, 'y', { e: 0, d: 0 })).toBe(0b1101);
    expect(signalValue(circuit, 'y', { e: 1, d: 2 })).toBe(0b1001);
  });

  it('make one bus of several', () => {
    const text = `module t (input s, a, b, output y);
      assign y = s ? a : 1'bz;
      assign y = s ? 1'bz : b;
    endmodule`;
    expect(column(text, ['s', 'a', 'b'])).toBe('0101' + '0011');
  });

  it('are handed on by a plain assignment', () => {
    const text = `module t (input e, f, a, b, output y);
      wire p = e ? a : 1'bz, q;
      assign q = p;
      assign y = q; assign y = f ? b : 1'bz;
    endmodule`;
    expect(column(text, ['e', 'f', 'a', 'b'])).toBe('xxxx' + '0101' + '0011' + '0xx1');
  });

  it('do not make buses of what is assigned from a net that always is driven', () => {
    const text = `module t (input a, b, output y); supply0 g; wand w; buf (w, a), (w, b);
      assign y = g;\n assign y = w; endmodule`;
    expect(reading(text).problems).toEqual(['net-multiply-driven y@3']);
  });

  it('are x to every gate', () => {
    const text = `module t (input e, d, output y); wire n = e ? d : 1'bz; assign y = ~n; endmodule`;
    expect(column(text, ['e', 'd'])).toBe('xx10');
  });

  it('alone drive nothing', () => {
    const { circuit } = reading(
      "module t (inout p, output y); assign p = 1'bz; assign y = p; endmodule",
    );
    expect(portsOf(circuit!.inputs)).toEqual(['p']);
  });
});

describe('strengths', () => {
  it('of open drains make a wired and of their net', () => {
    const text = `module t (input a, b, output y);
      pullup (y);
      assign (strong0, highz1) y = a;
      buf (strong0, highz1) (y, b);
    endmodule`;
    expect(column(text, ['a', 'b'])).toBe('0001');
    expect(checksOf(text)).toEqual([]);
  });

  // Clause 7.10.1: the stronger of two signals wins.
  it('decide between two drivers', () => {
    const t = (weaker: string): string => `module t (input a, b, output y);
      buf (y, a); ${weaker} endmodule`;
    for (const weaker of [
      'buf (pull0, pull1) (y, b);',
      'assign (weak0, weak1) y = b;',
      'wire (pull0, weak1) n = b; rtran (n, y);',
    ]) {
      expect(column(t(weaker), ['a', 'b'])).toBe('0011');
    }
    expect(column(t('not (supply0, supply1) (y, b);'), ['a', 'b'])).toBe('1010');
  });

  it('differ for the two values of one driver', () => {
    const text = `module t (input a, b, output y);
      assign (strong0, pull1) y = a;
      assign (pull0, strong1) y = b;
    endmodule`;
    expect(column(text, ['a', 'b'])).toBe('0xx1');
    const declared = `module t (input a, b, output y);
      wire (strong0, pull1) n = a; tran (n, y); buf (pull0, pull1) (y, b);
    endmodule`;
    expect(column(declared, ['a', 'b'])).toBe('00x1');
  });

  it('give a pull where nothing else drives', () => {
    const t = (pull: string): string =>
      `module t (input e, d, output y); ${pull} bufif1 (y, d, e); endmodule`;
    expect(column(t('pullup (y);'), ['e', 'd'])).toBe('1101');
    expect(column(t('pulldown (y);'), ['e', 'd'])).toBe('0001');
    expect(column(t('pulldown (weak0) (y); pullup (y);'), ['e', 'd'])).toBe('1101');
    expect(checksOf(t('pullup (y);'))).toEqual([]);
  });

  // Clause 7.12, table 7-8: a resistive switch makes pull of strong.
  it('are less behind a resistive switch', () => {
    const t = (word: string): string => `module t (input a, b, output y);
      buf (y, a); ${word} (y, b, 1'b1); endmodule`;
    expect(column(t('rnmos'), ['a', 'b'])).toBe('0011');
    expect(column(t('nmos'), ['a', 'b'])).toBe('0xx1');
  });
});

describe('net types', () => {
  it('of supplies win over all drivers that may be off', () => {
    const text = `module t (input e, d, output y);
      supply1 vdd; bufif1 (vdd, d, e); assign y = vdd; endmodule`;
    expect(column(text, ['e', 'd'])).toBe('1111');
  });

  it('of supplies that several instances share are one', () => {
    const text = `module pad (inout g, input d, output y); supply0 g; or (y, d, g); endmodule
      module t (input d, output y); supply0 g; wire n; pad u1 (g, d, n); pad u2 (g, n, y); endmodule`;
    expect(column(text, ['d'])).toBe('01');
  });

  it('wand and wor join what instances drive, by inouts too', () => {
    const t = (type: string): string => `module src (inout y, input a); buf (y, a); endmodule
      module t (input a, b, c, output y);
        ${type} n; src u1 (n, a); src u2 (n, b); buf (n, c); assign y = n;
      endmodule`;
    expect(column(t('triand'), ['a', 'b', 'c'])).toBe('00000001');
    expect(column(t('trior'), ['a', 'b', 'c'])).toBe('01111111');
  });

  it('wand inside an instance lets the net outside have further drivers', () => {
    const text = `module m (inout y, input a, b); wand y; buf (y, a); buf (y, b); endmodule
      module t (input a, b, c, output y); wire n; m u (n, a, b); buf (n, c); buf (y, n); endmodule`;
    expect(column(text, ['a', 'b', 'c'])).toBe('00000001');
  });

  // Clause 12.3.9.3, table 12-1: of two types that a port joins, the one outside decides.
  it('of a port are those outside, unless that is a wire', () => {
    const t = (type: string): string =>
      `module m (inout p, input d, e); tri0 p; bufif1 (p, d, e); endmodule
      module t (input d, e, output y); ${type} n; m u (n, d, e); assign y = n; endmodule`;
    expect(column(t('wire'), ['e', 'd'])).toBe('0001');
    expect(column(t('tri1'), ['e', 'd'])).toBe('1101');
  });

  it('trireg makes a latch, open while it is driven', () => {
    const circuit = circuitOf(`module t (input e, f, a, b, output y);
      trireg s; bufif1 (s, a, e); nmos (s, b, f); buf (y, s); endmodule`);
    const { count, output, enable, data } = circuit.latches;
    expect([count, ...output]).toEqual([1, ...netsOf(circuit, 's')]);
    expect(pinValues(circuit, enable[0]!, ['e', 'f'])).toBe('0111');
    expect(pinValues(circuit, data[0]!, ['a', 'b'], { e: 1, f: 1 })).toBe('0xx1');
    expect(circuit.checks.map(({ kind, name }) => `${kind} ${name}`)).toEqual(['conflict s']);
  });

  it('trireg with a single driver stores just what it drives', () => {
    const circuit = circuitOf(`module t (input e, a, output y);
      trireg s; nmos (s, a, e); buf (y, s); endmodule`);
    expect([...circuit.latches.enable]).toEqual(netsOf(circuit, 'e'));
    expect([...circuit.latches.data]).toEqual(netsOf(circuit, 'a'));
    expect(circuit.checks).toEqual([]);
  });

  it('trireg with a gate is an ordinary net', () => {
    const circuit = circuitOf('module t (input a, output y); trireg y; not (y, a); endmodule');
    expect(circuit.latches.count).toBe(0);
    expect(gatesOf(circuit)).toEqual(['not']);
  });
});

/** Values of a net for all values of some inputs, the first of them the highest bit. */
function pinValues(
  circuit: Circuit,
  net: number,
  inputs: readonly string[],
  others: Readonly<Record<string, number>> = {},
): string {
  return Array.from({ length: 1 << inputs.length }, (_, levels) => {
    const known = new Map<number, number>();
    for (const [name, value] of Object.entries(others)) known.set(netsOf(circuit, name)[0]!, value);
    inputs.forEach((name, i) => {
      known.set(netsOf(circuit, name)[0]!, (levels >> (inputs.length - 1 - i)) & 1);
    });
    return '01x'[evaluate(circuit, net, known)];
  }).join('');
}

describe('bus keepers', () => {
  const t = (keeper: string): string => `module t (input e, a, output y);
    wire n; bufif1 (y, a, e); ${keeper} endmodule`;

  it.each([
    ['a buffer onto itself', 'buf (weak0, weak1) (y, y);'],
    ['two buffers', 'buf (n, y); buf (weak0, weak1) (y, n);'],
    ['two weak buffers', 'buf (weak0, weak1) k1 (n, y), k2 (y, n);'],
    ['two inverters', 'not (n, y); not (pull0, pull1) (y, n);'],
    ['an assignment', 'not (n, y); assign (weak0, weak1) y = ~n;'],
  ])('of %s make a latch of their net', (_, keeper) => {
    const circuit = circuitOf(t(keeper));
    expect([...circuit.latches.output]).toEqual(netsOf(circuit, 'y'));
    expect([...circuit.latches.enable]).toEqual(netsOf(circuit, 'e'));
    expect([...circuit.latches.data]).toEqual(netsOf(circuit, 'a'));
    expect(circuit.checks).toEqual([]);
  });

  it('in a module of their own are found too', () => {
    const text = `module keeper (inout p); wire n; not (n, p); not (weak0, weak1) (p, n); endmodule
      module t (input e, a, f, b, output y);
        wire bus; bufif1 (bus, a, e); bufif1 (bus, b, f); keeper k (bus); buf (y, bus);
      endmodule`;
    const circuit = circuitOf(text);
    expect([...circuit.latches.output]).toEqual(netsOf(circuit, 'bus'));
    expect(pinValues(circuit, circuit.latches.enable[0]!, ['e', 'f'])).toBe('0111');
  });

  it('that invert are none', () => {
    expect(circuitOf(t('not (weak0, weak1) (y, y);')).latches.count).toBe(0);
  });

  it('are overridden by what is always on', () => {
    const circuit = circuitOf(`module t (input a, output y);
      buf (y, a); buf (weak0, weak1) (y, y); endmodule`);
    expect(circuit.latches.count).toBe(0);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(1);
  });
});

describe('switches', () => {
  it('in series let z through', () => {
    const text = `module t (input a, p, q, output y);
      tri1 y; wire n; nmos (n, a, p); nmos (y, n, q); endmodule`;
    expect(column(text, ['p', 'q', 'a'])).toBe('1111' + '1101');
  });

  it('let a pull through as a pull', () => {
    const text = `module t (input a, e, q, output y);
      wire n; pullup (n); nmos (n, a, e); nmos (y, n, q); assign (weak0, weak1) y = 1'b0;
      endmodule`;
    expect(column(text, ['q', 'e', 'a'])).toBe('0000' + '1101');
  });

  it('let the stored value of a trireg through', () => {
    const circuit = circuitOf(`module t (input a, e, q, output y);
      trireg s; wire n; nmos (s, a, e); nmos (n, s, q); pulldown (weak0) (n); buf (y, n);
      endmodule`);
    const stored = new Map([[netsOf(circuit, 's')[0]!, 1]]);
    expect(signalValue(circuit, 'y', { e: 0, q: 1 }, stored)).toBe(0);
    expect(signalValue(circuit, 'y', { e: 1, q: 1 }, stored)).toBe(1);
  });

  it('of two ways lead from the driven side to the other', () => {
    const text = `module t (input a, p, q, output y);
      wire m, n; tranif1 (m, n, p); buf (m, a); tranif0 (y, n, q); endmodule`;
    expect(column(text, ['p', 'q', 'a'])).toBe('xxxx' + '01xx');
    expect(column(text.replace('tranif0', 'rtranif0'), ['p', 'q', 'a'])).toBe('xxxx' + '01xx');
  });

  it('of two ways between modules find their direction', () => {
    const text = `module gate (inout p, q, input c); tranif1 (p, q, c); endmodule
      module t (input a, c, output y, z);
        wire n; gate u1 (y, a, c); gate u2 (n, z, c); not (n, a); endmodule`;
    expect(column(text, ['c', 'a'])).toBe('xx01');
  });

  it('of two ways side by side lead the same way', () => {
    const text = `module t (input a, p, q, output y);
      wire m; buf (m, a); tranif1 (m, y, p), (y, m, q); endmodule`;
    expect(column(text, ['p', 'q', 'a'])).toBe('xx010101');
  });

  it('of two ways hand on a pull where there is nothing stronger', () => {
    const text = `module t (input c, output y);
      wire n; pullup (n); tranif1 (y, n, c); endmodule`;
    expect(column(text, ['c'])).toBe('x1');
  });

  const problems = (items: string): readonly string[] =>
    reading(`module t (input a, b, c, output y);\n${items}\nendmodule`).problems;

  it('of two ways between two drivers are refused', () => {
    const items = 'buf (y, a); wire n; buf (n, b);\n tranif1 (y, n, c);';
    expect(problems(items)).toEqual(['not-supported tranif1@3']);
  });

  it('in a ring are refused', () => {
    const items = 'wire n; bufif1 (n, a, b);\n nmos (y, n, c);\n nmos (n, y, c);\n nmos (m, y, c);';
    expect([...problems(items)].sort()).toEqual(['not-supported nmos@3', 'not-supported nmos@4']);
  });

  it('from one stored value to another are refused', () => {
    const items = 'trireg m, n; nmos (m, a, b);\n nmos (n, m, c); buf (y, n);';
    expect(problems(items)).toEqual(['not-supported nmos@3']);
  });

  it('copied around in a ring by assignments drive at all times', () => {
    const text = `module t (input a, e, output y); wire n;
      bufif1 (n, a, e); assign y = n; assign n = y; endmodule`;
    expect(reading(text).problems).toEqual([]);
  });
});

describe('checks of buses', () => {
  const text = `module t (input [1:0] d, e, output [1:0] y);
    assign y = e[0] ? d : 2'bz;
    assign y = e[1] ? ~d : 2'bz;
  endmodule`;

  it('name the bits of a bus and the place of a driver', () => {
    const { checks, sources } = circuitOf(text);
    const found = checks.map(({ kind, name }) => `${kind} ${name}`);
    expect(found).toEqual(['conflict y[0]', 'float y[0]', 'conflict y[1]', 'float y[1]']);
    const lines = checks.map((check) => sources[check.sourceIndex]!.place(check.offset).line);
    expect(lines).toEqual([2, 2, 2, 2]);
  });

  it('are 1 where drivers disagree, and where none drives', () => {
    const circuit = circuitOf(text);
    const [conflict, float] = circuit.checks;
    const known = (e: number): Map<number, number> =>
      new Map([
        ...netsOf(circuit, 'e').map((net, i) => [net, (e >> i) & 1] as const),
        [netsOf(circuit, 'd')[0]!, 1],
      ]);
    const values = (net: number): number[] =>
      [0, 1, 2, 3].map((e) => evaluate(circuit, net, known(e)));
    expect(values(conflict!.when)).toEqual([0, 0, 0, 1]);
    expect(values(float!.when)).toEqual([1, 0, 0, 0]);
  });

  it('leave out what floats unread, pulled or stored, and what cannot disagree', () => {
    const t = (items: string): string =>
      `module t (input a, b, e, f, output y); wire n; buf (y, a); ${items} endmodule`;
    expect(checksOf(t('bufif1 (n, a, e);'))).toEqual([]);
    expect(checksOf(t('bufif1 (n, a, e); and (m, n, a);'))).toEqual(['float n']);
    expect(checksOf(t('bufif1 (n, a, e); pullup (n); and (m, n, a);'))).toEqual([]);
    expect(checksOf(t('trireg k; nmos (k, a, e); and (m, k, a);'))).toEqual([]);
    expect(checksOf(t('wor k; buf (k, a); bufif1 (k, b, e);'))).toEqual([]);
    expect(checksOf(t('bufif1 (pull0, pull1) (n, a, e); bufif1 (n, b, f);'))).toEqual([]);
  });

  it('are empty without buses', () => {
    expect(circuitOf('module t (input a, output y); not (y, a); endmodule').checks).toEqual([]);
  });
});
