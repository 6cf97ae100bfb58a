// Valves of the greenhouse's irrigation: parameters, modifiers, and claims that
// hold already. The scenario and its numbers are invented for this demo.
OPENQASM 3.0;
include "stdgates.inc";

const float[64] half_open = pi / 4;

// What one valve lets through, and what it holds back.
@cantle.matrix hermitian
array[complex[float[64]], 2, 2] flow = {
  {1, 0},
  {0, cos(half_open)}
};

// The gauge starts at zero; read as zero again, the flow has happened.
@cantle.encodes flow ancilla 1 scale 1.0 within 1e-12
gate valve gauge, pipe {
  ctrl @ ry(2 * half_open) pipe, gauge;
}

// A controlled turn without a controlled gate.
gate turn(by) tap, pipe {
  ry(by / 2) pipe;
  cx tap, pipe;
  ry(-by / 2) pipe;
  cx tap, pipe;
}

gate quarter tap, pipe {
  ctrl @ ry(pi / 2) tap, pipe;
}

@cantle.equals quarter within 1e-12
gate quarter_by_turns tap, pipe {
  turn(pi / 2) tap, pipe;
}

@cantle.equals swap within 1e-12
gate exchange_beds a, b {
  cx a, b;
  cx b, a;
  cx a, b;
}

// Opens the pipe when both beds are dry; the tally is used and given back.
@cantle.clean tally
gate both_dry tally, a, b, pipe {
  negctrl(2) @ x a, b, tally;
  ctrl @ pow(0.5) @ x tally, pipe;
  inv @ negctrl(2) @ x a, b, tally;
}

qubit[2] bed;
qubit pipe;
qubit tally;
h bed;
exchange_beds bed[0], bed[1];
both_dry tally, bed[0], bed[1], pipe;
quarter_by_turns bed[0], pipe;
