@a
@b.c  raw text  
int x;
{ { x q; } }
for bit b in "01" { }
for int i in a b c;
