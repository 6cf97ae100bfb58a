//! What a source file means: names, constants, claims, circuits
