OPENQASM 3.0;
include "stdgates.inc";

// Heat along three trays.
@cantle.matrix symmetric
array[complex[float[64]], 2, 2] bench = {{2, -1.5im}, {1 / sqrt(2), pi ** 2},};
const int[32] n = 3;
float[64] theta = -n * pi / 4;
input angle[20] phi;
output bit[3] result;

@cantle.dense bench within 1e-8
gate step(a, b) t, u { }

gate twist(a) t, u {
    ctrl @ inv @ rx(a / 2) t, u;
    negctrl(2) @ pow(1 / 2) @ x t, u, t;
    gphase(-a);
    for int i in [0:n - 1] { h t; }
}

qubit[3] tray;
qubit spare;
let ends = tray[0:2:2] ++ tray[{0, -1}];

def read(qubit[3] q, readonly array[float[64], 2] w, mutable array[int, #dim = 1] v) -> bit {
    return measure q[0];
}
extern weight(int, float[64]) -> float[64];

h tray; step(theta, 0.5) tray[0], tray[1];
barrier tray, spare;
reset $0;
delay[100ns] tray;
box[1us] { x tray[0]; }
for uint i in [0:2] { twist(i) tray[i], spare; }
for int i in {1, 2, 3} x tray[i];
if (theta > 1 && !(n == 3)) { x spare; } else if (true) y spare; else { z spare; }
while (n < 4) { continue; }
switch (n) {
    case 0, 1 { x spare; }
    default { break; }
}
bit[3] c = measure tray;
c[0] = measure spare;
measure spare -> c[1];
result = c;
n += 2 ** -1;
pragma note for the machine // kept
cal { play { "{}" } }
defcal rx(angle a) $0 { drive }
twist(1)[10ns] tray[0], spare; /* end */
end;
