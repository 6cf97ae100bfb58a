include "stdgates.inc;
include stdgates;
OPENQASM;
include /* no */ "a";
input int a = 1;
extern f(qubit q);
def f { x q; }
defcal x(1 ** 2) q { }
cal x;
cal { a { b }
