import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { Source } from '../../compiler/diagnostics/source.js';
import { designFrom } from '../support/ownCircuits.js';
import { importPackage, type ModelModule, packageFolder, packInto } from '../support/packages.js';

// Names that JavaScript gives a meaning to, and escaped ones (IEEE 1364-2005, 3.7.1).
const source = `module names(input clk, input constructor, input [7:0] __proto__,
    input [39:0] toString, input \\q"u'o\`t\${e}*/\\ ,
    output reg then, output hasOwnProperty, output reg [7:0] valueOf, output \\b[1] , output w$rd);
  reg [39:0] length;
  wire isPrototypeOf = constructor ^ then;
  always @(posedge clk) begin
    then <= constructor;
    valueOf <= __proto__;
    length <= toString;
  end
  assign hasOwnProperty = isPrototypeOf, \\b[1] = \\q"u'o\`t\${e}*/\\ , w$rd = length[3];
endmodule`;

const root = packageFolder();
let names: ModelModule;

beforeAll(async () => {
  const design = designFrom(new Source('names.v', source));
  await packInto(join(root, 'names'), design, { keepNames: 'all' });
  names = await importPackage(join(root, 'names'));
});

const quoted = `q"u'o\`t\${e}*/\\`;
const given = { constructor: 1, ['__proto__']: 7, toString: 8n, [quoted]: 1 };
const after = Object.fromEntries([
  ...([
    ['then', 1],
    ['hasOwnProperty', 0],
  ] as const),
  ...([
    ['valueOf', 7],
    ['b[1]', 1],
    ['w$rd', 1],
  ] as const),
]);

describe('ports called as members of objects, and escaped', () => {
  it('are written, read and looked at by their names', async () => {
    const model = await names.load();
    model.write(given).step();
    expect(model.read()).toEqual(after);
    expect(model.read('__proto__')).toBe(7);
    expect(model.peek('isPrototypeOf')).toBe(0);
    expect(model.peek('length')).toBe(8n);
    expect(model.runUntil(after, 3)).toEqual({ met: true, cycles: 0 });
    const told: unknown[] = [];
    model.subscribe((changes) => told.push(Object.entries(changes)), ['__proto__', 'then']);
    model.write({ ['__proto__']: 9 });
    expect(told).toEqual([[['__proto__', 9]]]);
  });

  it('are columns of a block like any others', async () => {
    const model = await names.load();
    const stimulus = { ['__proto__']: Uint8Array.of(3, 5), constructor: Uint8Array.of(1, 0) };
    const { response } = model.run({ cycles: 2, stimulus, response: ['valueOf', 'then'] });
    expect(Object.entries(response)).toEqual([
      ['valueOf', Uint32Array.of(0, 3)],
      ['then', Uint32Array.of(0, 1)],
    ]);
  });

  it('keep a promise from being taken for a value of them', async () => {
    const there = await names.loadInWorker();
    await there.write(given);
    await there.step();
    expect(await there.read()).toEqual(after);
    there.dispose();
  });

  it('are no ports where the netlist has none of that name', async () => {
    const model = await names.load();
    for (const name of ['isPrototypeOf', '__defineGetter__', 'propertyIsEnumerable']) {
      expect(() => model.read(name)).toThrow(RangeError);
      expect(() => model.write({ [name]: 1 })).toThrow(RangeError);
    }
    expect(() => model.peek('toLocaleString')).toThrow(RangeError);
  });
});
