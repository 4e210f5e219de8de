//! The direction field of a model in numbers: which way the state moves, where each species stands still, the straight
//! paths through equilibria, and what divides the paths. Nothing here knows of characters or colours.
//!
//! Two species lie along the axes, all others are held: a [`Slice`]. A [`Frame`] lays a grid of cells over a part of it,
//! `slice` and `window` choose both where nobody says, `zoom` moves it, [`Flow`] evaluates, and [`portrait()`] puts everything together for a
//! plane, [`profile()`] for a model of one species. All of it is numerical; nothing is proved here.

mod divide;
mod flow;
mod frame;
mod portrait;
mod profile;
mod sight;
mod slice;
mod straight;
mod window;
mod zoom;

pub use flow::{Flow, Motion};
pub use frame::{DEEPEST, Frame, LINEAR, Octant, Scale, Window, nearest};
pub use portrait::{Portrait, portrait};
pub use profile::{Profile, profile};
pub use sight::Sight;
pub use slice::{Held, Slice};
pub use straight::{Straight, straight};
pub use window::{above_zero, around, rounded};
pub use zoom::{moved, zoomed};

/// How much higher than wide a character cell is, about; angles are those that the eye sees.
pub const CELL_ASPECT: f64 = 2.0;
