foo bar baz; ;
}
else { x q; }
case 1 { }
int int;
qubit q[2];
int 3;
) x q;
x q;
