/** One NAND of two inputs: 6 faults on 3 lines. */
export const NAND = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'

/** ISCAS-85 c17 (Brglez & Fujiwara 1985; from memory): 17 lines, 22 collapsed faults. */
export const C17 = `INPUT(1)
INPUT(2)
INPUT(3)
INPUT(6)
INPUT(7)
OUTPUT(22)
OUTPUT(23)
10 = NAND(1, 3)
11 = NAND(3, 6)
16 = NAND(2, 11)
19 = NAND(11, 7)
22 = NAND(10, 16)
23 = NAND(16, 19)
`

/** Two blocks of hierarchy in Verilog: a flip-flop and an inverter behind each input. */
export const TWO_BLOCKS = `module leaf (input a, input ck, output reg q);
  wire n;
  not g1 (n, a);
  always @(posedge ck) q <= n;
endmodule
module top (input x, input y, input ck, output p, output r);
  leaf u1 (.a(x), .ck(ck), .q(p));
  leaf u2 (.a(y), .ck(ck), .q(r));
endmodule
`
