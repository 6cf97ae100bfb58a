cal { a { b } }
cal {}
defcal measure $0 -> bit { x }
defcal rz(pi / 2) $1, $2 { }
defcal if(angle[20] a, qubit q) while { }
defcalgrammar "openpulse";
