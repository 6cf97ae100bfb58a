x(1, 007, 1_000, 0x1F, 0XaB_c, 0b01, 0B1, 0o17, 1., .5, 5.e1, 1e3, 1_0e1_0, 2E-3) q;
x(1im, 1 im, 2.5e3 im, 10ns, 10 us, 1µs, 1μs, 3dt, .5ms, 2s) q;
for int i in 1 start;
x[1.:2];
"01_01";
