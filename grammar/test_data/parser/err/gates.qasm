gate a q { h q;
gate b q { x q; }
gat c q { y q; }
gate d { z q; }
gate e q[2] { z q; }
gate f(a b) q { z q; }
z q;
