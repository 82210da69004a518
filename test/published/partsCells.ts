/** A latch and flip-flops as user-defined primitives (IEEE 1364-2005, clause 8), for the parts. */
export const cells = `
  primitive high_latch (q, g, d);
    output q; reg q; input g, d;
    table
      1 0 : ? : 0;
      1 1 : ? : 1;
      0 ? : ? : -;
    endtable
  endprimitive

  primitive rising_d (q, clk, d);
    output q; reg q; input clk, d;
    table
      r 0 : ? : 0;
      r 1 : ? : 1;
      n ? : ? : -;
      ? * : ? : -;
    endtable
  endprimitive

  primitive rising_d_clear (q, clk, d, clr_n);
    output q; reg q; input clk, d, clr_n;
    table
      ? ? 0 : ? : 0;
      r 0 1 : ? : 0;
      r 1 1 : ? : 1;
      n ? 1 : ? : -;
      ? * 1 : ? : -;
      ? ? r : ? : -;
    endtable
  endprimitive

  primitive falling_jk (q, clk, j, k, pre, clr);
    output q; reg q; input clk, j, k, pre, clr;
    table
      ? ? ? ? 1 : ? : 0;
      ? ? ? 1 0 : ? : 1;
      f 0 0 0 0 : ? : -;
      f 1 0 0 0 : ? : 1;
      f 0 1 0 0 : ? : 0;
      f 1 1 0 0 : 0 : 1;
      f 1 1 0 0 : 1 : 0;
      p ? ? 0 0 : ? : -;
      ? * ? 0 0 : ? : -;
      ? ? * 0 0 : ? : -;
      ? ? ? n 0 : ? : -;
      ? ? ? 0 n : ? : -;
    endtable
  endprimitive
`;
