//! What the user can want: one word an intent. Which key means which is in `keymap`, what it does in `update`.

/// A direction on the screen.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Direction {
    /// Towards smaller abundance along the horizontal axis.
    Left,
    /// Towards larger abundance along the horizontal axis.
    Right,
    /// Towards larger abundance along the vertical axis.
    Up,
    /// Towards smaller abundance along the vertical axis.
    Down,
}

/// An axis of the sketch.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Axis {
    /// The horizontal one.
    Across,
    /// The vertical one.
    Upwards,
}

/// A step through a list.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Step {
    /// One back.
    Back,
    /// One on.
    On,
    /// A page back.
    PageBack,
    /// A page on.
    PageOn,
    /// To the first.
    First,
    /// To the last.
    Last,
}

/// An intent.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Action {
    /// Through the list of the screen: equilibria, parameters, models, lines.
    Step(Step),
    /// To the scenario before, or after.
    Scenario(Step),
    /// Through the numbers of the selected equilibrium.
    Numbers(Step),
    /// To another screen.
    Show(super::Screen),
    /// What keys there are.
    Help,
    /// Out of what is open, or stop what is under way.
    Stop,
    /// Takes what is selected.
    Accept,
    /// Writes what the screen shows to a file.
    Write,
    /// Leaves the program.
    Leave,
    /// Pauses the program, to go on later.
    Suspend,
    /// Draws all anew.
    Redraw,
    /// Reads the model file again.
    Reload,
    /// Makes the sketch show less, larger.
    Closer,
    /// Makes the sketch show more, smaller.
    Wider,
    /// Shows all equilibria and today's stocks.
    Fit,
    /// Puts the selected equilibrium into the middle.
    Centre,
    /// Moves the window of the sketch, or ends it.
    Drag,
    /// Moves the point, or ends it.
    Point,
    /// Takes the point away.
    NoPoint,
    /// Where the point could have come from, or no longer.
    Backwards,
    /// Another species along an axis.
    Species(Axis),
    /// A logarithmic axis, or again a linear one.
    Logarithmic(Axis),
    /// Moves what is being moved.
    Move(Direction),
    /// A larger or smaller value, by the fine step.
    Fine(Step),
    /// The same by the coarse step.
    Coarse(Step),
    /// Takes back the last change of a value.
    Undo,
    /// Does it again.
    Redo,
    /// Types a value.
    Type,
    /// All values back to the scenario's own.
    Forget,
    /// The tried values as a new scenario, in a copy of the model file.
    Record,
    /// Opens the copy that was recorded last.
    OpenCopy,
    /// Takes up the values that were tried when the program ran last.
    TakeUp,
    /// Completes the path that is typed; where something is written, changes what.
    Complete,
    /// Another kind of the same screen: what the interactions show, what the knock hits, which control is varied.
    Other,
    /// A knock that leaves more, or less.
    Knock(Step),
    /// To the threshold before, or after.
    Threshold(Step),
    /// The value at the rule becomes a tried value.
    TakeOver,
    /// Absent species among the interactions, or only those that are there.
    Absent,
    /// To another part of what is shown.
    Scroll(Direction),
}
