if (a { x q; }
x q[0;
f(1;
pow(2 @ x q;
while a { y q; }
z q;
