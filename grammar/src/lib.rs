//! OpenQASM 3 text to tokens, a lossless tree, typed nodes
