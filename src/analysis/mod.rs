//! What the equations imply: equilibria, and all that is asked of them.
//!
//! Takes a model's rows and a budget, returns results that say why they stopped. Nothing here reads a clock, starts a
//! thread or prints: the budget's `stop` and the order of work come from outside. [`prepare`] makes a model's scenarios
//! ready, [`subject`] is what every analysis works on, [`equilibria`] finds the states, [`linearise`] and [`measures`] say
//! what each is like, [`paths`] where paths go, [`assess`] puts it together. [`passage`] tells which state of one scenario is
//! which of another, [`response`] what becomes of all of them as a control varies, [`field`] has the direction field to be
//! drawn, and [`uncertain`] what is drawn where parameters are uncertain.

pub mod assess;
pub mod equilibria;
pub mod field;
pub mod linearise;
pub mod measures;
pub mod passage;
pub mod paths;
pub mod prepare;
pub mod response;
pub mod subject;
pub mod uncertain;
