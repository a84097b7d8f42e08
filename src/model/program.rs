//! A graph compiled to a list of instructions over registers.
