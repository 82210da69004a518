import { describe, expect, it } from 'vitest';
import { reading } from './reading.js';

/** The problems of a text; one of severity error must leave no circuit. */
function problemsOf(text: string, top?: string): readonly string[] {
  const { circuit, diagnostics, problems } = reading(text, top);
  expect(circuit === undefined).toBe(diagnostics.hasErrors);
  return problems;
}

const messageOf = (text: string, top?: string): string =>
  reading(text, top).diagnostics.list[0]!.message;

/** The text under the related spans of the first diagnostic, and their lines. */
const relatedOf = (text: string): string[] =>
  reading(text).diagnostics.list[0]!.related!.map(({ span: { source, start, end } }) => {
    return `${source.slice(start, end)}@${source.place(start).line}`;
  });

const inverter = 'module inv (input a, output y); not (y, a); endmodule\n';

describe('the choice of the top', () => {
  it('lists the candidates where it is open', () => {
    const text = 'module a; endmodule\nmodule b; endmodule\n';
    expect(problemsOf(text)).toEqual(['top-ambiguous a@1']);
    expect(messageOf(text)).toContain('a, b; choose one with --top NAME');
    expect(relatedOf(text)).toEqual(['b@2']);
  });

  it('says so where each module is instantiated', () => {
    const text = 'module a; b u (); endmodule module b; a u (); endmodule';
    expect(problemsOf(text)).toEqual(['top-ambiguous @1']);
    expect(problemsOf(text, 'a')).toEqual(['module-recursive a@1']);
  });

  it('lists what there is where the name is unknown', () => {
    expect(problemsOf(`${inverter}module t; endmodule`, 'top')).toEqual(['top-unknown @1']);
    expect(messageOf(`${inverter}module t; endmodule`, 'top')).toContain('there is inv, t');
  });

  it('reports a text without module', () => {
    expect(problemsOf('')).toEqual(['top-unknown @1']);
  });
});

describe('modules', () => {
  it('that no file defines are listed in one message with their pins', () => {
    const text = `module t (input a, output y, z);
      NAND2 u1 (.A(a), .B(a), .Y(n1));
      NAND2 u2 (.A(n1), .Y(y));
      BUFX u3 (z, n1);
    endmodule`;
    expect(problemsOf(text)).toEqual(['module-unknown NAND2@2']);
    const message = messageOf(text);
    expect(message).toContain('module NAND2 (2 instances, pins A, B, Y)');
    expect(message).toContain('module BUFX (1 instance, 2 pins by position)');
    expect(relatedOf(text)).toEqual(['BUFX@4']);
  });

  it('are unknown only where the design reaches them', () => {
    const text = `module unused; MISSING u (); endmodule\n${inverter}`;
    expect(problemsOf(text, 'inv')).toEqual([]);
  });

  it('with one name are reported', () => {
    const text = 'module a; endmodule\nmodule a; wire w; endmodule';
    expect(problemsOf(text, 'a')).toEqual(['module-redefined a@2']);
    expect(relatedOf(text)).toEqual(['a@1']);
  });

  it('that contain themselves are reported', () => {
    expect(problemsOf('module a;\n a u (); endmodule')).toEqual(['module-recursive a@2']);
    const text = 'module a #(parameter N = 0);\n a #(N + 1) u (); endmodule';
    expect(problemsOf(text)).toEqual(['module-recursive a@2']);
  });

  it('need a name for each instance', () => {
    expect(problemsOf(`${inverter}module t (input a, output y);\n inv (a, y); endmodule`)).toEqual([
      'syntax-error inv@3',
    ]);
  });
});

describe('connections', () => {
  const t = (instance: string): string =>
    `${inverter}module t (input [1:0] a, output [1:0] y);\n${instance}\nendmodule`;

  it('to a port that the module lacks are reported', () => {
    const text = t('inv u (.a(a[0]), .q(y[0]), .y(y[1])); assign y[0] = 0;');
    expect(problemsOf(text)).toEqual(['port-unknown q@3']);
    expect(messageOf(text)).toBe('inv has no port q; it has a, y');
  });

  it('beyond the ports are reported', () => {
    expect(problemsOf(t('inv u (a[0], y[0], y[1]); assign y[1] = 0;'))).toEqual(['port-count y@3']);
  });

  it('of a port for the second time are reported', () => {
    expect(problemsOf(t('inv u (.a(a[0]), .a(a[1]), .y(y[0])); assign y[1] = 0;'))).toEqual([
      'name-redeclared a@3',
    ]);
  });

  it('that are wider than the port are cut with a warning', () => {
    expect(problemsOf(t('inv u (.a(a), .y(y));'))).toEqual([
      'width-mismatch a@3',
      'width-mismatch y@3',
    ]);
    expect(messageOf(t('inv u (.a(a), .y(y));'))).toContain('port a of u has 1 bit');
  });

  it('that are narrower than the port are padded with a warning', () => {
    const text = `module m (input [3:0] a, output [3:0] y); assign y = a; endmodule
      module t (input [1:0] a, output [1:0] y, z);
        m u1 (a, y);
        m u2 (a + a, z);
      endmodule`;
    expect(problemsOf(text)).toEqual([
      'width-mismatch a@3',
      'width-mismatch y@3',
      'width-mismatch a + a@4',
      'width-mismatch z@4',
    ]);
  });

  it('by a number without width need no warning', () => {
    expect(problemsOf(t('inv u0 (0, y[0]); inv u1 (a[0] + 1, y[1]);'))).toEqual([]);
  });

  it('of an array take the bits of one port or of all', () => {
    expect(problemsOf(t('inv u [2:0] (a[0], {y, y[0]}); '))).toContain('net-multiply-driven inv@3');
    expect(problemsOf(t('wire [2:0] w; inv u [2:0] (a, w); assign y = w;'))).toEqual([
      'range-invalid a@3',
    ]);
  });

  it('to what cannot be driven are reported', () => {
    expect(problemsOf(t("inv u (a[0], 1'b0); assign y = 0;"))).toEqual(["target-invalid 1'b0@3"]);
    expect(problemsOf(t('reg r; inv u (a[0], r); assign y = 0;'))).toEqual(['target-invalid r@3']);
  });
});

describe('names', () => {
  it('that are declared twice are reported', () => {
    const text = 'module t (input a, output y);\n wire n;\n reg n;\n buf (y, a); endmodule';
    expect(problemsOf(text)).toEqual(['name-redeclared n@3']);
    expect(relatedOf(text)).toEqual(['n@2']);
  });

  it.each([
    ['an instance', 'wire n; inv n (a, y);', 'name-redeclared n@2'],
    ['a gate', 'wire n; not n (y, a);', 'name-redeclared n@2'],
    ['two instances', 'inv u (a, y), u (a, n);', 'name-redeclared u@2'],
    ['a parameter', 'parameter y = 1; inv u (a, y);', 'name-redeclared y = 1@2'],
    ['a task', 'task y; input a; ; endtask', 'name-redeclared task y; input a; ; endtask@2'],
    ['a block', 'wire g; if (1) begin : g end', 'name-redeclared begin : g end@2'],
    ['a port', 'input a; inv u (a, y);', 'name-redeclared a@2'],
  ])('of %s that are taken are reported', (_, item, expected) => {
    const text = `module t (input a, output y);\n${item}\nendmodule\n${inverter}`;
    const [first] = problemsOf(text, 't');
    expect(first).toBe(expected);
  });

  it('that are undeclared are reported where implicit nets are off', () => {
    const text = `\`default_nettype none
      module t (input a, output y);
        not (n, a); buf (y, n); assign m = a;
      endmodule`;
    expect(problemsOf(text)).toEqual([
      'name-undeclared n@3',
      'name-undeclared n@3',
      'name-undeclared m@3',
    ]);
  });

  it('of ports need a direction', () => {
    expect(problemsOf('module t (a, y);\n output y; assign y = 0; endmodule')).toEqual([
      'name-undeclared a@1',
    ]);
  });

  it('of ports stand in the header', () => {
    expect(problemsOf('module t (y);\n output y; input a; assign y = 0; endmodule')).toEqual([
      'port-unknown a@2',
    ]);
    expect(problemsOf('module t (y, y);\n output y; assign y = 0; endmodule')).toEqual([
      'name-redeclared y@1',
    ]);
  });

  it('of parameters that a module lacks are reported', () => {
    const module = 'module m #(parameter P = 1) (input a); endmodule\n';
    const t = (item: string): string => `${module}module t (input a);\n${item} endmodule`;
    expect(problemsOf(t('m #(.Q(2)) u (a);'))).toEqual(['name-undeclared Q@3']);
    expect(messageOf(t('m #(.Q(2)) u (a);'))).toBe('module m has no parameter Q; it has P');
    expect(problemsOf(t('m #(1, 2) u (a);'))).toEqual(['port-count 2@3']);
    expect(problemsOf(t('m u (a); defparam u.Q = 2;'))).toEqual(['name-undeclared m@3']);
    expect(problemsOf(t('m u (a); defparam v.P = 2;'))).toEqual(['name-undeclared v.P = 2@3']);
  });
});

describe('ranges', () => {
  it.each([
    ["wire [1'bx:0] n;", 'range-invalid'],
    ['wire [2000000:0] n;', 'range-invalid'],
    ['output y; wire [1:0] y;', 'range-invalid'],
    ['wire [a:0] n;', 'constant-required'],
  ])('in %s are reported', (item, code) => {
    const header = item.startsWith('output') ? '(a, y); input a;' : '(input a);';
    const [first] = problemsOf(`module t ${header}\n${item} endmodule`);
    expect(first!.startsWith(`${code} `)).toBe(true);
    expect(first!.endsWith('@2')).toBe(true);
  });
});

describe('gates', () => {
  it.each([
    ['and (y);', 'gate-arity and@2'],
    ['not (y);', 'gate-arity not@2'],
    ['and g (y, a, );', 'gate-arity and@2'],
    ['pullup (y, a);', 'gate-arity pullup@2'],
    ['tran (y);', 'gate-arity tran@2'],
    ['and (.y(y), .a(a), .b(a));', 'port-unknown and@2'],
    ['bufif1 (y, a);', 'gate-arity bufif1@2'],
    ['nmos (y, a, a, a);', 'gate-arity nmos@2'],
    ['cmos (y, a, a);', 'gate-arity cmos@2'],
    ['tranif0 (y, a);', 'gate-arity tranif0@2'],
  ])('in %s are reported', (item, expected) => {
    const [first] = problemsOf(`module t (input a, output y);\n${item}\nendmodule`);
    expect(first).toBe(expected);
  });

  it('take the lowest bit of a vector with a warning', () => {
    const text = 'module t (input [1:0] a, output y);\n buf (y, a); endmodule';
    expect(problemsOf(text)).toEqual(['width-mismatch a@2']);
  });
});

describe('nets', () => {
  it('with several drivers are reported once for all their bits', () => {
    const text = `module t (input [3:0] a, output [3:0] y);
      assign y[2:0] = a;
      assign y = ~a;
    endmodule`;
    expect(problemsOf(text)).toEqual(['net-multiply-driven y@3']);
    expect(messageOf(text)).toBe('y[2:0] has 2 drivers; leave one of them');
    expect(relatedOf(text)).toEqual(['y@2']);
  });

  it('that several instances drive are reported at the instances', () => {
    const text = `${inverter}module t (input a, output y);\n inv u1 (a, y);\n inv u2 (a, y); endmodule`;
    expect(problemsOf(text)).toEqual(['net-multiply-driven inv@4']);
    expect(relatedOf(text)).toEqual(['inv@3']);
  });

  it('of input ports may not be driven inside the top', () => {
    expect(
      problemsOf('module t (input a, output y);\n assign a = 0; buf (y, a); endmodule'),
    ).toEqual(['net-multiply-driven a@1']);
  });

  it('of a supply may not have a gate as a driver too', () => {
    const text = 'module t (input a, output y);\n supply1 n;\n not (n, a); buf (y, n); endmodule';
    expect(problemsOf(text)).toEqual(['net-multiply-driven not@3']);
    expect(relatedOf(text)).toEqual(['n@2']);
  });

  it('with a tri-state driver may have one gate beside it, not two', () => {
    const t = (gates: string): string =>
      `module t (input a, b, output y);\n bufif1 (y, a, b);\n ${gates} endmodule`;
    expect(problemsOf(t('not (y, a);'))).toEqual([]);
    expect(problemsOf(t('not (y, a), (y, b);'))).toEqual(['net-multiply-driven (@3']);
  });

  it('of ports with another name than their signal are reported in the header', () => {
    const text = 'module t (.p(d),\n .q(y)); input d; output y; assign d = y; endmodule';
    expect(problemsOf(text)).toEqual(['net-undriven .q(y)@2', 'net-multiply-driven .p(d)@1']);
  });

  it('of inout ports that are driven inside the top become outputs', () => {
    const text = 'module t (input a,\n inout y); buf (y, a); endmodule';
    expect(problemsOf(text)).toEqual(['inout-as-output y@2']);
    expect(messageOf(text)).toContain('inout y of the top module is driven inside');
    const { circuit } = reading(text);
    expect(circuit!.inputs.map(({ name }) => name)).toEqual(['a']);
    expect(circuit!.outputs.map(({ name }) => name)).toEqual(['y']);
  });

  it('that a hierarchical name drives in an instance may have no other driver', () => {
    const text = `module m (input a, output y);
      wire n; assign n = a; assign y = n; endmodule
    module t (input a, output y);
      m u (a, y);
      assign u.n = 0;
    endmodule`;
    expect(problemsOf(text).map((problem) => problem.split(' ')[0])).toEqual([
      'net-multiply-driven',
    ]);
  });

  it('of instances are named with their blocks, each by itself', () => {
    const text = `module leaf (input a, output y);
      wire \\q[1] , \\q[2] ; assign \\q[1] = a, \\q[2] = a, y = a;
      if (1) begin : inner wire [3:0] w; assign w = {4{a}}; end
    endmodule
    module mid (input a, output y);
      if (1) begin : g leaf v (a, y); end
    endmodule
    module t (input a, output y);
      if (1) begin : h mid u (a, y); end
      assign h.u.g.v.\\q[1] = 0, h.u.g.v.\\q[2] = 0, h.u.g.v.inner.w[2:1] = 0;
    endmodule`;
    const messages = reading(text).diagnostics.list.map(({ message }) => message);
    expect(messages.sort()).toEqual(
      ['q[1]', 'q[2]', 'inner.w']
        .map((name) => `h.u.g.v.${name} has 2 drivers; leave one of them`)
        .sort(),
    );
  });

  it('without driver are reported where they are read', () => {
    const text = `module t (input a, output [1:0] y, output z);
      wire n, unread;
      reg r;
      wire [3:0] v;
      assign v[2:1] = {a, a};
      assign y = {n, r};
      assign z = ^v;
    endmodule`;
    expect(problemsOf(text)).toEqual(['net-undriven n@2', 'net-undriven r@3', 'net-undriven v@4']);
  });

  it('that an instance leaves open are reported there', () => {
    const text = `${inverter}module t (output y, z);
      inv u1 (.a(), .y(y));
      inv u2 (.y(z));
    endmodule`;
    expect(problemsOf(text)).toEqual(['net-undriven inv@3', 'net-undriven inv@4']);
  });

  it('of outputs of the top need a driver', () => {
    expect(
      problemsOf('module t (output y, output [3:0] z);\n assign z[1:0] = 0; endmodule'),
    ).toEqual(['net-undriven y@1', 'net-undriven z@1']);
  });

  it('without driver are only counted beyond fifty', () => {
    const names = Array.from({ length: 60 }, (_, i) => `n${i}`);
    const text = `module t (output y); wire ${names.join(', ')}; assign y = ^{${names}}; endmodule`;
    const problems = problemsOf(text);
    expect(problems).toHaveLength(51);
    expect(problems[50]).toBe('net-undriven');
    expect(reading(text).diagnostics.list[50]!.message).toBe(
      '10 more nets are read but have no driver',
    );
  });
});

describe('generate constructs', () => {
  const t = (items: string): string => `module t (input a);\n${items}\nendmodule`;

  it('need an end', () => {
    const text = t('genvar i; for (i = 0; i < 2; i = i) begin : g end');
    expect(problemsOf(text)[0]!.split(' ')[0]).toBe('loop-unbounded');
  });

  it('need a genvar of their own', () => {
    expect(problemsOf(t('for (i = 0; i < 2; i = i + 1) begin : g end'))[0]).toMatch(
      /^name-undeclared for/,
    );
    const nested = `genvar i; for (i = 0; i < 2; i = i + 1) begin : g
      for (i = 0; i < 2; i = i + 1) begin : h end end`;
    expect(problemsOf(t(nested))[0]).toMatch(/^name-undeclared for.*@3$/s);
  });

  it('need constant conditions', () => {
    expect(problemsOf(t('if (a) begin : g end'))).toEqual(['constant-required a@2']);
  });

  it('say what is wrong inside a loop once', () => {
    const text = t('genvar i; for (i = 0; i < 9; i = i + 1) begin : g assign y = q; end');
    expect(problemsOf(text)).toEqual(['name-undeclared q@2']);
  });
});

describe('arrays', () => {
  it('of too many bits or indices are refused', () => {
    const t = (item: string): string => `module t (input a);\n${item} endmodule`;
    expect(problemsOf(t('reg m [0:1][0:1];'))).toEqual([]);
    expect(problemsOf(t('reg [63:0] m [0:99999];'))).toEqual([]);
    expect(problemsOf(t('reg [63:0] m [0:9999999];'))).toEqual(['not-supported m@2']);
    expect(problemsOf(t('wire [63:0] m [0:99999];'))).toEqual(['not-supported m@2']);
    const indices = '[0:2]'.repeat(16);
    expect(problemsOf(t(`reg m ${indices};`))).toEqual(['not-supported m@2']);
  });
});
