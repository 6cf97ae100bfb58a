//! End-to-end checks: command line, protocol, editors, outside references
