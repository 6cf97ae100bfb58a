x 1__0; x 0O7; 1..2; OPENQASM3;
