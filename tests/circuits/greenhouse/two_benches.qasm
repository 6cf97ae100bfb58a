// Two benches of four seed trays that also warm each other across the aisle.
// The scenario and its numbers are invented for this demo.
//
// `aisle` acts on one qubit that names the bench and two that name the tray: a
// chain along each bench, and an exchange at rate 0.5 between trays that face
// each other. Its stand-in `exchange` is called by a gate that two further
// calls use, so whoever replaces it has to pass the new ancillas through.
OPENQASM 3.0;
include "stdgates.inc";

@cantle.matrix hermitian
array[complex[float[64]], 8, 8] aisle = {
  { 2.5,   -1,    0,    0, -0.5,    0,    0,    0},
  {  -1,  2.5,   -1,    0,    0, -0.5,    0,    0},
  {   0,   -1,  2.5,   -1,    0,    0, -0.5,    0},
  {   0,    0,   -1,  2.5,    0,    0,    0, -0.5},
  {-0.5,    0,    0,    0,  2.5,   -1,    0,    0},
  {   0, -0.5,    0,    0,   -1,  2.5,   -1,    0},
  {   0,    0, -0.5,    0,    0,   -1,  2.5,   -1},
  {   0,    0,    0, -0.5,    0,    0,   -1,  2.5}
};

@cantle.dense aisle within 1e-8
gate exchange side, t1, t0 {}

// One hour: the vents turn the trays' basis, heat moves, the vents turn back.
gate hour(opening) side, t1, t0 {
  ry(opening) t0;
  exchange side, t1, t0;
  ry(-opening) t0;
}

gate morning side, t1, t0 {
  hour(pi / 8) side, t1, t0;
  x side;
}

qubit bench;
qubit[2] tray;
h tray;
morning bench, tray[0], tray[1];
hour(0.25) bench, tray[0], tray[1];
