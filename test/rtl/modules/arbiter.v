// Round robin arbiter for N masters; a master keeps the bus while it asks for it.
module arbiter #(parameter N = 4, parameter STYLE = "RING") (
  input              clk, rst_n,
  input      [N-1:0] request,
  output reg [N-1:0] grant
);
  reg  [N-1:0] first;             // who is asked first, one-hot
  wire [N-1:0] pick;

  genvar i;
  generate
    if (N == 1) begin : single
      assign pick = request;
    end
    else if (STYLE == "RING") begin : ring
      // The question goes round the ring and stops at the last before the first one.
      wire [N-1:0] asked, passed;
      for (i = 0; i < N; i = i + 1) begin : place
        assign asked[i]  = first[i] | passed[(i + N - 1) % N];
        assign pick[i]   = asked[i] & request[i];
        assign passed[i] = asked[i] & ~request[i] & ~first[(i + 1) % N];
      end
    end
    else if (STYLE == "DOUBLE") begin : double
      // Lowest request at or above the first one, in a copy of the requests behind each other.
      wire [2*N-1:0] twice = {request, request};
      wire [2*N-1:0] low   = twice & ~(twice - first);
      assign pick = low[2*N-1:N] | low[N-1:0];
    end
    else begin : scan
      // One after the other, as a program would.
      reg     [N-1:0] found;
      integer k, at;
      always @* begin : search
        found = {N{1'b0}};
        at = 0;
        for (k = 0; k < N; k = k + 1)
          if (first[k]) at = k;
        for (k = 0; k < N; k = k + 1)
          if (found == 0 && request[(at + k) % N]) found[(at + k) % N] = 1'b1;
      end
      assign pick = found;
    end
  endgenerate

  always @(posedge clk or negedge rst_n)
    if (!rst_n) begin
      grant <= {N{1'b0}};
      first <= {{N-1{1'b0}}, 1'b1};
    end
    else if (!(grant & request)) begin
      grant <= pick;
      // The one after the new owner is asked first the next time.
      if (pick) first <= N == 1 ? pick : {pick, pick} >> (N - 1);
    end
endmodule

// Masters put address and data on the bus by and-or.
module bus_mux #(parameter N = 4, W = 8) (
  input  [N-1:0]   grant,
  input  [N*W-1:0] data,
  output [W-1:0]   bus
);
  function [W-1:0] selected(input [N-1:0] g, input [N*W-1:0] d);
    integer n;
    begin
      selected = 0;
      for (n = 0; n < N; n = n + 1)
        selected = selected | (d[n*W +: W] & {W{g[n]}});
    end
  endfunction
  assign bus = selected(grant, data);
endmodule

// Masters put their data on the bus by drivers that let go of it.
module bus_drivers #(parameter N = 4, W = 8) (
  input  [N-1:0]   grant,
  input  [N*W-1:0] data,
  output [W-1:0]   bus
);
  genvar n;
  generate
    for (n = 0; n < N; n = n + 1) begin : master
      assign bus = grant[n] ? data[n*W +: W] : {W{1'bz}};
    end
  endgenerate
endmodule
