import { describe, expect, it } from 'vitest';
import { caseTwins } from '../../../compiler/circuit/analyses/caseTwins.js';
import { leafInstances } from '../../../compiler/circuit/analyses/leafInstances.js';
import type { Hierarchy } from '../../../compiler/circuit/hierarchy.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';

function hierarchyOf(text: string): Hierarchy {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source('t.v', text)], {}, diagnostics);
  diagnostics.throwIfErrors();
  return circuit!.hierarchy;
}

describe('case twins', () => {
  const twins = (text: string) =>
    caseTwins(hierarchyOf(text)).map(({ first, second }) => `${first} ${second}`);

  it('are signals of one module, told once however many instances it has', () => {
    expect(
      twins(`
        module c (input a, output y); wire Mid, mid; not (mid, a); not (Mid, mid); buf (y, Mid); endmodule
        module t (input a, output [1:0] y); c u (a, y[0]), v (a, y[1]); endmodule`),
    ).toEqual(['u.Mid u.mid']);
  });

  it('are vectors without their indices, and instances of one scope', () => {
    expect(
      twins(`
        module c (input a, output y); buf (y, a); endmodule
        module t (input [1:0] In, in, output [3:0] y);
          c U1 (In[0], y[0]), u1 (In[1], y[1]), u2 (in[0], y[2]), w (in[1], y[3]);
        endmodule`),
    ).toEqual(['In in', 'U1 u1']);
  });

  it('are not found between modules, or in names that differ otherwise', () => {
    expect(
      twins(`
        module c (input A, output y); buf (y, A); endmodule
        module t (input a, B, b1, output Y, y2); c C (a, Y), D (B, y2); endmodule`),
    ).toEqual([]);
  });
});

describe('leaf instances', () => {
  it('are those of modules without others inside, blocks looked through', () => {
    expect(
      leafInstances(
        hierarchyOf(`
          module inv (input a, output reg y);
            always @* begin : inner reg m; m = a; y = ~m; end
          endmodule
          module wide (input [2:0] a, output [2:0] y);
            genvar i;
            generate for (i = 0; i < 3; i = i + 1) begin : g inv u (a[i], y[i]); end endgenerate
          endmodule
          module t (input [2:0] a, output [2:0] y, output z);
            wide w (a, y);
            inv inv (a[0], z);
          endmodule`),
      ),
    ).toEqual([['inv', 4]]);
  });

  it('do not count the top', () => {
    expect(
      leafInstances(hierarchyOf('module t (input a, output y); buf (y, a); endmodule')),
    ).toEqual([]);
  });
});
