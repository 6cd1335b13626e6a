//! A log measured on the machine, held against the plan.
mod law;
mod model;
mod robust;
