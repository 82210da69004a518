/** A small library of our own, the power pins under an `ifdef`, with models that need them on. */
export const verilogLibrary = `
\`ifdef WITH_SUPPLIES
  \`define PINS , VDD, VSS, VPB, VNB
  \`define DECLARED inout VDD, VSS, VPB, VNB;
  primitive flop (q, d, c, r, vdd, vss); output q; reg q; input d, c, r, vdd, vss; table
    1 r 0 1 0 : ? : 1; 0 r ? 1 0 : ? : 0; ? n ? 1 0 : ? : -; * ? ? 1 0 : ? : -;
    ? ? 1 1 0 : ? : 0; ? ? n 1 0 : ? : -; ? ? ? 0 ? : ? : x; ? ? ? ? 1 : ? : x;
    ? ? ? * ? : ? : x; ? ? ? ? * : ? : x;
  endtable endprimitive
\`else
  \`define PINS
  \`define DECLARED
  primitive flop (q, d, c, r); output q; reg q; input d, c, r; table
    1 r 0 : ? : 1; 0 r ? : ? : 0; ? n ? : ? : -; * ? ? : ? : -; ? ? 1 : ? : 0; ? ? n : ? : -;
  endtable endprimitive
\`endif
\`celldefine
module DFR (Q, D, C, R \`PINS); output Q; input D, C, R; \`DECLARED
  \`ifdef WITH_SUPPLIES
    flop (Q, D, C, R, VDD, VSS);
  \`else
    flop (Q, D, C, R);
  \`endif
endmodule
module LAT (Q, D, G \`PINS); output Q; input D, G; \`DECLARED
  reg Q;
  \`ifdef WITH_SUPPLIES
    always @(D or G or VDD or VSS)
      if (VDD !== 1'b1 || VSS !== 1'b0) Q <= 1'bx; else if (G) Q <= D;
  \`else
    always @(D or G) if (G) Q <= D;
  \`endif
endmodule
module NR2 (Y, A, B \`PINS); output Y; input A, B; \`DECLARED
  wire n;
  nor (n, A, B);
  \`ifdef WITH_SUPPLIES
    assign Y = (VDD === 1'b1 && VSS === 1'b0) ? n : 1'bx;
  \`else
    assign Y = n;
  \`endif
endmodule
module XR2 (Y, A, B \`PINS); output Y; input A, B; \`DECLARED
  \`ifdef WITH_SUPPLIES
    wire n; xor (n, A, B); bufif1 (Y, n, VDD);
  \`else
    xor (Y, A, B);
  \`endif
endmodule
module TIEH (Y \`PINS); output Y; \`DECLARED assign Y = 1'b1; endmodule
\`ifdef WITH_SUPPLIES
  module FILL (VDD, VSS, VPB, VNB); inout VDD, VSS, VPB, VNB; endmodule
\`else
  module FILL (); endmodule
\`endif
\`endcelldefine
`;

const power = ['VDD', 'VSS', 'VPB', 'VNB'];
const types = ['primary_power', 'primary_ground', 'nwell', 'pwell'];

/** The same cells in Liberty, with the groups of their power pins or without. */
export function libertyLibrary(withPower: boolean): string {
  const groups = power.map((pin, i) => `pg_pin (${pin}) { pg_type : ${types[i]}; }`).join(' ');
  const cell = (name: string, inputs: string, rest: string): string =>
    `cell (${name}) { ${withPower ? groups : ''}
      ${[...inputs].map((pin) => `pin (${pin}) { direction : input; }`).join(' ')} ${rest} }`;
  const output = (pin: string, value: string): string =>
    `pin (${pin}) { direction : output; function : "${value}"; power_down_function : "!VDD + VSS"; }`;
  return `library (small) { voltage_map (VDD, 1.2); voltage_map (VSS, 0);
    ${cell('DFR', 'DCR', `ff (I, N) { next_state : "D"; clocked_on : "C"; clear : "R"; } ${output('Q', 'I')}`)}
    ${cell('LAT', 'DG', `latch (I, N) { data_in : "D"; enable : "G"; } ${output('Q', 'I')}`)}
    ${cell('NR2', 'AB', output('Y', '!(A + B)'))}
    ${cell('XR2', 'AB', output('Y', 'A ^ B'))}
    ${cell('TIEH', '', output('Y', '1'))}
    ${cell('FILL', '', '')}
  }`;
}

/** How a netlist has its power: by ports of the top or nets inside it, declared as supplies or not. */
export type Power = 'none' | 'inout' | 'declared' | 'input' | 'inner';

/** A netlist of two levels over the library. */
export function netlist(kind: Power): string {
  const on = kind !== 'none';
  const pins = on ? ', .VDD(VDD), .VSS(VSS), .VPB(VDD), .VNB(VSS)' : '';
  const ports = on ? ', VDD, VSS' : '';
  const hasPorts = on && kind !== 'inner';
  const passed = on ? ', .VDD(VDD), .VSS(VSS)' : '';
  const declared = kind === 'input' ? 'input' : 'inout';
  const supplies = kind === 'declared' || kind === 'input' ? 'supply1 VDD; supply0 VSS;' : '';
  return `
    module half (a, c, r, y${ports}); input a, c, r; output y; ${on ? 'inout VDD, VSS;' : ''}
      wire n, q;
      DFR f (.D(n), .C(c), .R(r), .Q(q)${pins});
      NR2 g (.A(a), .B(q), .Y(n)${pins});
      XR2 x (.A(a), .B(q), .Y(y)${pins});
    endmodule
    module chip (a, g, c, r, y, z${hasPorts ? ports : ''});
      input a, g, c, r; output y, z; ${hasPorts ? `${declared} VDD, VSS;` : ''} ${supplies}
      wire l, one;
      TIEH t (.Y(one)${pins});
      LAT e (.D(a), .G(g), .Q(l)${pins});
      half h0 (.a(l), .c(c), .r(r), .y(y)${passed});
      half h1 (.a(one), .c(c), .r(r), .y(z)${passed});
      FILL fill_0 (${pins.slice(2)});
    endmodule`;
}
