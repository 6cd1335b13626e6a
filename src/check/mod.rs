//! Plan → findings: one file a kind of limit.
