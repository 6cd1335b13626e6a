//! An independent second look at a table.
