import { it } from 'vitest';
import { circuitFrom, responseTo } from './courses.js';
const tryIt = (name: string, text: string, rows: string[], o = {}) => it(name, async () => {
  console.log(name, (await responseTo(circuitFrom(text), rows, { threeValued: true, ...o })).map((r, i) => `${rows[i]}:${r}`).join('  '));
});
tryIt('incomplete', `primitive p (y, a, b); output y; input a, b; table 0 0 : 0; 1 1 : 1; 0 1 : 1; endtable endprimitive
 module t (input a, b, output y); p (y, a, b); endmodule`, ['00','01','10','11','0x','x0']);
tryIt('explicit x', `primitive p (y, a, b); output y; input a, b; table 0 0 : 0; 1 1 : 1; 0 1 : x; 1 0 : x; endtable endprimitive
 module t (input a, b, output y); p (y, a, b); endmodule`, ['00','01','10','11','0x','x0']);
tryIt('srff', `primitive srff (q, s, r); output q; reg q; input s, r; initial q = 1'b1; table 1 0 : ? : 1; f 0 : 1 : -; 0 r : ? : 0; 0 f : 0 : -; 1 1 : ? : 0; endtable endprimitive
 module t (input s, r, output q); srff (q, s, r); endmodule`, ['00','01','00','10','00','11','01','00'], { powerUp: 'unknown'});
tryIt('jk', `primitive jk (q, clock, j, k, preset, clear); output q; reg q; input clock, j, k, preset, clear; table
 ? ?? 01 : ? : 1;  ? ?? *1 : 1 : 1;  ? ?? 10 : ? : 0;  ? ?? 1* : 0 : 0;
 r 00 00 : 0 : 1;
 r 00 11 : ? : -;
 r 01 11 : ? : 0;
 r 10 11 : ? : 1;
 r 11 11 : 0 : 1;
 r 11 11 : 1 : 0;
 f ?? ?? : ? : -;
 b *? ?? : ? : -;
 b ?* ?? : ? : -; endtable endprimitive
 module t (input clock, j, k, preset, clear, output q); jk (q, clock, j, k, preset, clear); endmodule`, ['1111', '0001', '0011','0011','1011','0011']);
tryIt('dff', `primitive d_ff (q, c, d); output q; reg q; input c, d; table (01) 0 : ? : 0; (01) 1 : ? : 1; (0?) 1 : 1 : 1; (0?) 0 : 0 : 0; (?0) ? : ? : -; ? (??) : ? : -; endtable endprimitive
 module t (input c, d, output q); d_ff (q, c, d); endmodule`, ['1', '0', '0','x','0','0']);
tryIt('latch', `primitive la (q, c, d); output q; reg q; input c, d; table 0 1 : ? : 1; 0 0 : ? : 0; 1 ? : ? : -; endtable endprimitive
 module t (input c, d, output q); la (q, c, d); endmodule`, ['01', '10', 'x1','x0','00','x0']);
tryIt('bufif', `module t (input d, c, output a, b, e, f, g, h); bufif0 (a,d,c); bufif1(b,d,c); notif0(e,d,c); notif1(f,d,c); bufif1(g,d,c); pullup(g); bufif1(h,d,c); pulldown(h); endmodule`, ['00','01','0x','10','11','1x','x0','x1','xx']);
