//! Integer fixed point inside a move.
