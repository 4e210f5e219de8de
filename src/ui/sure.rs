//! How sure something is, as a sign: proved, numerical and open are told apart without colour.

use super::paint::Page;
use crate::analysis::linearise::{Kind, Linearisation};
use crate::report::grid::Ink;

/// How sure an equilibrium and its type are.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Sure {
    /// State, type and stability are proved.
    Proved,
    /// Computed; nothing of it is proved, or not all.
    Numerical,
    /// Not even computed: the linear part does not decide, or there is none.
    Open,
}

impl Sure {
    pub(super) fn of(is_there: bool, linear: Option<&Linearisation>) -> Self {
        match linear {
            Some(linear) if is_there && linear.kind_proven && linear.stable_proven => Self::Proved,
            Some(linear) if linear.kind != Kind::Undecided => Self::Numerical,
            _ => Self::Open,
        }
    }

    /// Its sign.
    pub(super) fn mark(self, page: &Page<'_>) -> (char, Ink) {
        match self {
            Self::Proved => (page.either('✓', '+'), Ink::Proved),
            Self::Numerical => (page.either('≈', '#'), Ink::Numerical),
            Self::Open => ('?', Ink::Undecided),
        }
    }

    /// What the sign means.
    pub(super) fn word(self) -> &'static str {
        match self {
            Self::Proved => "proved",
            Self::Numerical => "numerical",
            Self::Open => "open",
        }
    }
}
