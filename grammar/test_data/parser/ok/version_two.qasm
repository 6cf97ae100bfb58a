OPENQASM 2.0;
qreg q[2];
creg c[2];
opaque magic(a) p, r;
if (c == 1) x q[0];
measure q -> c;
