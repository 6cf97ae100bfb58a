const n = 8;
const m = -1.5;
const k = n + 1;
gphase -pi / 2;
ctrl @x q, r;
defcal g $0 $1 { }
for i in [0:3] { }
