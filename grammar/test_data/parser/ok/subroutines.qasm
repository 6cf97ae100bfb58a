def f(int a, qubit[2] q, creg c[2], qreg r) -> bit[2] { return; }
def g() { }
extern h(int, readonly array[int, 2], creg[2]) -> float;
extern i;
