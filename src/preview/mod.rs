//! Plan + optics → pictures, and the data of a page that plays the show.
//!
//! Everything here returns text or bytes; `cli/` writes them.

pub mod light;
pub mod moments;
pub mod scene;
