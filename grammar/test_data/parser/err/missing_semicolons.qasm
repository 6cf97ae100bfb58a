h q
x q;
gate a q { h q }
int x = 5
measure q -> c
reset q
end