switch (x) { h q; case { } default { } }
switch x { case 1 { } }
for int i in [0] { }
for int i in { } x q;
box x q;
delay q;
if (a)
