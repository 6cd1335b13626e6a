//! Exact straight lines over ticks, floored at every tick without division.
