//! The fixed-point sine and cosine.
