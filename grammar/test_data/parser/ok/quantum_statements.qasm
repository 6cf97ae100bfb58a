measure q;
measure q[0] -> c[1];
bit b = measure $0;
b ^= measure q;
return measure q;
reset q[0];
barrier;
nop q, r;
delay[a + 10ns];
