//! Plan → rows, and the forms they are written in.
