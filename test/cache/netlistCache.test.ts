import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import { CacheStore } from '../../compiler/cache/cacheStore.js';
import { NetlistCache } from '../../compiler/cache/netlistCache.js';
import { packNetlist, unpackNetlist } from '../../compiler/cache/netlistEntry.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { diagnosticText } from '../../compiler/cli/printDiagnostics.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { includeReader } from '../../compiler/read/verilog/includes.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-netlists-'));
afterAll(() => rmSync(folder, { recursive: true }));

/** A circuit with its names written out, to be compared. */
function written({ hierarchy, ...rest }: Circuit) {
  const modules = hierarchy.modules.map(({ signals, ...module }) => ({
    ...module,
    signals: [...signals],
    last: signals.at(signals.length - 1),
    beyond: signals.at(signals.length),
  }));
  const scopeNames = [...hierarchy.scopeNames];
  expect(hierarchy.scopeNames.length).toBe(scopeNames.length);
  return { ...rest, hierarchy: { ...hierarchy, modules, scopeNames } };
}

/** Files that are read from memory. */
type Files = Readonly<Record<string, string>>;

/** Reads `top.v` of some files, or finds it known. */
function load(store: CacheStore, files: Files, options: { readonly top?: string } = {}) {
  const encoder = new TextEncoder();
  const bytesOf = (path: string) =>
    files[path] === undefined ? undefined : encoder.encode(files[path]);
  const named = [new Source('top.v', files['top.v']!)];
  const cache = new NetlistCache(store);
  const known = cache.find({ named, options }, bytesOf);
  if (known !== undefined) return { ...known, isKnown: true };
  const looked: { path: string; bytes: Uint8Array | undefined }[] = [];
  const read = (path: string) => {
    const bytes = bytesOf(path);
    looked.push({ path, bytes });
    return bytes;
  };
  const diagnostics = new Diagnostics();
  const readInclude = includeReader(['first', 'second'], read);
  const circuit = readNetlist(named, { ...options, readInclude }, diagnostics)!;
  const result = { circuit, found: diagnostics.list };
  const id = cache.keep({ named, options }, looked, result);
  return { ...result, id, isKnown: false };
}

const files: Files = {
  'top.v': `\`include "part.vh"
module top(input clk, input [3:0] \\in[0] , output [1:0] q, output \\ü );
  wire unused, floating;
  part p(.clk(clk), .d(\\in[0] [1:0]), .q(q));
  assign \\ü = floating;
endmodule
`,
  'second/part.vh': `module part(input clk, input [1:0] d, output reg [1:0] q);
  always @(posedge clk) q <= d;
endmodule
`,
};

let stores = 0;
const newStore = () => new CacheStore(join(folder, String(stores++)), '1');

describe('a netlist that has been read before', () => {
  it('is found with its names and what was said of it', async () => {
    const store = newStore();
    const first = load(store, files);
    await store.flush();
    const again = load(store, files);
    expect([first.isKnown, again.isKnown]).toEqual([false, true]);
    expect(written(again.circuit)).toEqual(written(first.circuit));
    expect(again.id).toBe(first.id);
    expect(first.found.length).toBeGreaterThan(0);
    expect(again.found.map(diagnosticText)).toEqual(first.found.map(diagnosticText));
  });

  it('is read again where a file or an option differs', async () => {
    const store = newStore();
    const ids = new Set([load(store, files).id]);
    await store.flush();
    const others: [Files, { top?: string }?][] = [
      [{ ...files, 'top.v': `${files['top.v']}// more\n` }],
      [{ ...files, 'second/part.vh': files['second/part.vh']!.replace('posedge', 'negedge') }],
      // Found before the other one from now on.
      [{ ...files, 'first/part.vh': files['second/part.vh']! }],
      [files, { top: 'part' }],
    ];
    for (const [changed, options] of others) {
      const loaded = load(store, changed, options);
      expect(loaded.isKnown).toBe(false);
      ids.add(loaded.id);
    }
    expect(ids.size).toBe(1 + others.length);
    expect(load(store, files).isKnown).toBe(true);
  });

  it('is not kept where a text is in no file', async () => {
    const store = newStore();
    const { circuit } = load(store, files);
    const sources = [...circuit.sources, new Source('elsewhere', '')];
    const request = { named: [new Source('other.v', '')], options: {} };
    new NetlistCache(store).keep(request, [], { circuit: { ...circuit, sources }, found: [] });
    await store.flush();
    expect(new NetlistCache(store).find(request, () => undefined)).toBeUndefined();
  });
});

describe('a packed circuit', () => {
  it.each(['uart', 'lock', 'crc32'])('is %s again', (name) => {
    const text = [...circuits.find((each) => each.name === name)!.write()].join('');
    const source = new Source(`${name}.v`, text);
    const circuit = readNetlist([source], {}, new Diagnostics())!;
    const { restore } = unpackNetlist(packNetlist({ circuit, found: [] }, []));
    expect(written(restore(() => source).circuit)).toEqual(written(circuit));
  });

  it('keeps memories and cells that are told by tables', () => {
    const source = new Source(
      'm.v',
      `primitive keep(q, s, r); output q; reg q; input s, r;
  table 1 0 : ? : 1; 0 1 : ? : 0; 0 0 : ? : -; endtable
endprimitive
module m(input clk, input we, input [7:0] a, input [7:0] d, output [7:0] q, output k);
  reg [7:0] words [0:255];
  always @(posedge clk) if (we) words[a] <= d;
  assign q = words[a];
  keep c(k, d[0], d[1]);
endmodule
`,
    );
    const circuit = readNetlist([source], {}, new Diagnostics())!;
    expect(circuit.memories).toHaveLength(1);
    const { restore } = unpackNetlist(packNetlist({ circuit, found: [] }, []));
    const again = restore(() => source).circuit;
    expect(written(again)).toEqual(written(circuit));
    const table = circuit.tables.definitions[0]!;
    const { diagram } = again.tables.definitions[0]!.three;
    expect(diagram.plain()).toEqual(table.three.diagram.plain());
    expect(diagram.walk(table.three.settled, (variable) => [1, 0, 2, 2][variable]!)).toBe(1);
  });
});
