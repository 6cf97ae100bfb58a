// Heat along a greenhouse bench of eight seed trays. The scenario and its
// numbers are invented for this demo.
//
// Each tray gives heat to its two neighbours; the trays at the ends also touch
// the walls, which stay cold. `bench` is that exchange per step of time.
// The gate `step` stands in for it until it is synthesised:
//
//     cantle encode bench.qasm
OPENQASM 3.0;
include "stdgates.inc";

@cantle.matrix hermitian
array[complex[float[64]], 8, 8] bench = {
  { 2, -1,  0,  0,  0,  0,  0,  0},
  {-1,  2, -1,  0,  0,  0,  0,  0},
  { 0, -1,  2, -1,  0,  0,  0,  0},
  { 0,  0, -1,  2, -1,  0,  0,  0},
  { 0,  0,  0, -1,  2, -1,  0,  0},
  { 0,  0,  0,  0, -1,  2, -1,  0},
  { 0,  0,  0,  0,  0, -1,  2, -1},
  { 0,  0,  0,  0,  0,  0, -1,  2}
};

@cantle.dense bench within 1e-8
gate step t2, t1, t0 {}

qubit[3] tray;
h tray;
step tray[2], tray[1], tray[0];
