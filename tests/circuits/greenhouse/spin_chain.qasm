// Four lamps above the bench, each of which leans on its neighbours: an open
// chain of four spins with couplings 1.0 (XX), 0.7 (YY) and 0.4 (ZZ). The
// scenario is invented for this demo; the matrix is the sum over the three
// neighbouring pairs, first operand most significant.
OPENQASM 3.0;
include "stdgates.inc";

@cantle.matrix hermitian
array[complex[float[64]], 16, 16] lamps = {
  {1.2,   0,    0, 0.3,    0,    0,  0.3,   0,   0,    0,    0,    0, 0.3,    0,   0,   0},
  {  0, 0.4,  1.7,   0,    0,    0,    0, 0.3,   0,    0,    0,    0,   0,  0.3,   0,   0},
  {  0, 1.7, -0.4,   0,  1.7,    0,    0,   0,   0,    0,    0,    0,   0,    0, 0.3,   0},
  {0.3,   0,    0, 0.4,    0,  1.7,    0,   0,   0,    0,    0,    0,   0,    0,   0, 0.3},
  {  0,   0,  1.7,   0, -0.4,    0,    0, 0.3, 1.7,    0,    0,    0,   0,    0,   0,   0},
  {  0,   0,    0, 1.7,    0, -1.2,  1.7,   0,   0,  1.7,    0,    0,   0,    0,   0,   0},
  {0.3,   0,    0,   0,    0,  1.7, -0.4,   0,   0,    0,  1.7,    0,   0,    0,   0,   0},
  {  0, 0.3,    0,   0,  0.3,    0,    0, 0.4,   0,    0,    0,  1.7,   0,    0,   0,   0},
  {  0,   0,    0,   0,  1.7,    0,    0,   0, 0.4,    0,    0,  0.3,   0,    0, 0.3,   0},
  {  0,   0,    0,   0,    0,  1.7,    0,   0,   0, -0.4,  1.7,    0,   0,    0,   0, 0.3},
  {  0,   0,    0,   0,    0,    0,  1.7,   0,   0,  1.7, -1.2,    0, 1.7,    0,   0,   0},
  {  0,   0,    0,   0,    0,    0,    0, 1.7, 0.3,    0,    0, -0.4,   0,  1.7,   0,   0},
  {0.3,   0,    0,   0,    0,    0,    0,   0,   0,    0,  1.7,    0, 0.4,    0,   0, 0.3},
  {  0, 0.3,    0,   0,    0,    0,    0,   0,   0,    0,    0,  1.7,   0, -0.4, 1.7,   0},
  {  0,   0,  0.3,   0,    0,    0,    0,   0, 0.3,    0,    0,    0,   0,  1.7, 0.4,   0},
  {  0,   0,    0, 0.3,    0,    0,    0,   0,   0,  0.3,    0,    0, 0.3,    0,   0, 1.2}
};

@cantle.dense lamps within 1e-8
gate couple l0, l1, l2, l3 {}

qubit[4] lamp;
x lamp[0];
couple lamp[0], lamp[1], lamp[2], lamp[3];
