import { flatNetlist } from './netlist.js';

/** A kind of file that designers have, of which some megabytes are written and read. */
export interface Shape {
  readonly name: string;
  /** The files in the order in which a command names them, as chunks of text by file name. */
  readonly files: ReadonlyMap<string, () => Iterable<string>>;
  /** Whether the cell library of the demonstration is named beside them. */
  readonly usesCells: boolean;
}

/** The shapes that are measured, for about so many megabytes of text each. */
export function shapesOf(megabytes: number): readonly Shape[] {
  const instances = Math.round(megabytes * 13_000);
  const verilog = (name: string, chunks: () => Iterable<string>, usesCells = false): Shape => ({
    name,
    files: new Map([['shape.v', chunks]]),
    usesCells,
  });
  return [
    verilog('flat, named connections', () => flatNetlist(instances), true),
    verilog('flat, connections by position', () => byPosition(megabytes * 19_000)),
    verilog('flat, attributes and comments', () => annotated(0.6 * instances), true),
    verilog('a tree of modules', () => tree(megabytes * 3300)),
    verilog('assignments with operators', () => assigns(megabytes * 21_000)),
    {
      name: 'gates in the ISCAS text form',
      files: new Map([['shape.bench', () => bench(megabytes * 40_000)]]),
      usesCells: false,
    },
    {
      name: 'a Liberty library, most of it tables',
      files: new Map<string, () => Iterable<string>>([
        ['shape.v', () => ['module m(a, y); input a; output y; c_7 u (.a(a), .y(y)); endmodule\n']],
        ['shape.lib', () => liberty(megabytes * 300)],
      ]),
      usesCells: false,
    },
  ];
}

const one = (names: readonly string[], index: number): string => names[index % names.length]!;

/** Gates whose nets are scalars, names that need a backslash, and bits of vectors. */
function* byPosition(count: number): Generator<string> {
  yield 'module gates (a, y);\n  input [2:0] a;\n  output y;\n';
  const net = (index: number): string => {
    if (index < 3) return `a[${index}]`;
    if (index % 4 === 0) return `\\unit/part_${index >> 5}/n[${index}] `;
    return index % 4 === 1 ? `bus_${index >> 5}[${index & 31}]` : `n_${index}`;
  };
  const words = ['nand', 'nor', 'and', 'or', 'xor', 'xnor'];
  for (let i = 3; i < count; i++) {
    if (i === 3 || (i & 31) === 0) yield `  wire [31:0] bus_${i >> 5};\n`;
    if (i % 4 !== 1) yield `  wire ${net(i)};\n`;
    yield `  ${one(words, i)} gate_${i} (${net(i)}, ${net(i - 1)}, ${net(i - 3)});\n`;
  }
  yield `  buf (y, ${net(count - 1)});\nendmodule\n`;
}

function* annotated(instances: number): Generator<string> {
  let line = 0;
  for (const chunk of flatNetlist(Math.round(instances))) {
    yield chunk.replaceAll(/^ {2}(?=\w+ [^,;]*\()/gm, () => {
      line++;
      return `  // Placed by the layout, row ${line % 97}.\n  (* src = "core/part.v:${line}" *) /* ${line} */ `;
    });
  }
}

/** Modules of eight gates, each of which but the leaves has two others inside. */
function* tree(modules: number): Generator<string> {
  const words = ['nand', 'nor', 'and', 'or', 'xor', 'xnor'];
  for (let module = 0; module < modules; module++) {
    const lines = [`module part_${module} (a, b, y);`, '  input [7:0] a, b;'];
    lines.push('  output [7:0] y;', '  wire [7:0] left, right;');
    for (const [side, name] of ['left', 'right'].entries()) {
      const child = 2 * module + 1 + side;
      if (child < modules) lines.push(`  part_${child} ${name}_part (.a(b), .b(a), .y(${name}));`);
      else lines.push(`  assign ${name} = ~a;`);
    }
    for (let bit = 0; bit < 8; bit++) {
      const word = one(words, module + bit);
      lines.push(`  ${word} gate_${bit} (y[${bit}], left[${bit}], right[${7 - bit}]);`);
    }
    yield `${lines.join('\n')}\nendmodule\n`;
  }
}

/** One assignment a net, each of nets before it. */
function* assigns(count: number): Generator<string> {
  yield 'module assigned (a, y);\n  input [3:0] a;\n  output y;\n';
  const net = (index: number): string => (index < 4 ? `a[${index}]` : `net_${index}`);
  const operators = ['&', '|', '^', '~^'];
  for (let i = 4; i < count; i++) {
    const [first, second, third] = [1, 2 + (i % 2), 4].map((back) => net(Math.max(0, i - back)));
    const value = `(${first} ${one(operators, i)} ~${second}) ${one(operators, i >> 2)} ${third}`;
    yield `  wire net_${i};\n  assign net_${i} = ${value};\n`;
  }
  yield `  assign y = ${net(count - 1)};\nendmodule\n`;
}

function* bench(count: number): Generator<string> {
  yield 'INPUT(n_0)\nINPUT(n_1)\nINPUT(n_2)\n';
  yield `OUTPUT(n_${count - 1})\n`;
  const words = ['NAND', 'NOR', 'AND', 'OR', 'XOR', 'DFF'];
  for (let i = 3; i < count; i++) {
    const word = one(words, i);
    yield `n_${i} = ${word}(n_${i - 1}${word === 'DFF' ? '' : `, n_${i - 3}`})\n`;
  }
}

/** Cells of about five kilobytes, nearly all of it tables of times. */
function* liberty(cells: number): Generator<string> {
  yield 'library (shape) {\n  delay_model : table_lookup;\n';
  const axis = '"0.01, 0.02, 0.04, 0.08, 0.16, 0.32, 0.64"';
  for (let cell = 0; cell < cells; cell++) {
    const row = Array.from({ length: 7 }, (_, i) => (0.0131 * (i + 1 + (cell % 13))).toFixed(6));
    const values = new Array(7).fill(`          "${row.join(', ')}"`).join(', \\\n');
    const table = (name: string): string =>
      `      ${name} (seven_by_seven) {\n        index_1 (${axis});\n        index_2 (${axis});\n` +
      `        values ( \\\n${values});\n      }\n`;
    const tables = ['cell_rise', 'rise_transition', 'cell_fall', 'fall_transition'].map(table);
    yield `  cell (c_${cell}) {\n    area : 1.5;\n    pin (a) { direction : input; capacitance : 0.002; }\n` +
      `    pin (y) {\n      direction : output;\n      function : "!a";\n      timing () {\n` +
      `      related_pin : "a";\n${tables.join('')}      }\n    }\n  }\n`;
  }
  yield '}\n';
}
