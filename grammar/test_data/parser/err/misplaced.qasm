@a
{ x q; }
@b
pragma c
pragma
x q; OPENQASM 3.0;
@last