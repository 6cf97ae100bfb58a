//! The lints, one file each, and their table
