//! The one table of keys: what each means where, and how help says it. Nothing else knows a key.
//!
//! To bind something: a row here, and its action in `update`. The same key may mean something else in another place, never
//! two things in one. No key needs a modifier, for lines, multiplexers and serial consoles take those for themselves; `~` is
//! left to the line too.

use super::action::{Action, Axis, Direction, Step};
use super::key::Key;
use super::{App, Dialog, Hold, Screen};

/// Where keys have a meaning of their own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Place {
    /// A screen, nothing open over it.
    On(Screen),
    /// While the point is moved.
    Pointing,
    /// While the window of the sketch is moved.
    Dragging,
    /// Over the help, or a message that fills the screen.
    Reading,
    /// While a text is typed: characters go into it.
    Typing,
}

/// One row of the table.
#[derive(Clone, Copy, Debug)]
pub struct Binding {
    /// Any of them does it; the first are shown.
    pub keys: &'static [Key],
    /// What it does.
    pub action: Action,
    /// How help says it, beginning with a verb.
    pub help: &'static str,
    /// Where.
    pub places: &'static [Place],
}

const CHOOSER: Place = Place::On(Screen::Chooser);
const EQUILIBRIA: Place = Place::On(Screen::Equilibria);
const BESIDE: Place = Place::On(Screen::SideBySide);
const INTERACTIONS: Place = Place::On(Screen::Interactions);
const KNOCK: Place = Place::On(Screen::Knock);
const VALUES: Place = Place::On(Screen::Values);
const RESPONSE: Place = Place::On(Screen::Response);

/// Wherever a model is shown.
const STUDY: &[Place] = &[EQUILIBRIA, BESIDE, INTERACTIONS, KNOCK, VALUES, RESPONSE];
const SKETCH: &[Place] = &[EQUILIBRIA, BESIDE, VALUES];
const SKETCH_AND_HOLDS: &[Place] = &[EQUILIBRIA, BESIDE, VALUES, Place::Pointing, Place::Dragging];
const LISTS: &[Place] = &[CHOOSER, EQUILIBRIA, BESIDE, INTERACTIONS, KNOCK, VALUES, RESPONSE, Place::Reading];
const ANYWHERE: &[Place] = &[
    CHOOSER,
    EQUILIBRIA,
    BESIDE,
    INTERACTIONS,
    KNOCK,
    VALUES,
    RESPONSE,
    Place::Pointing,
    Place::Dragging,
    Place::Reading,
    Place::Typing,
];
const BUT_TYPING: &[Place] =
    &[CHOOSER, EQUILIBRIA, BESIDE, INTERACTIONS, KNOCK, VALUES, RESPONSE, Place::Pointing, Place::Dragging];
const HOLDS: &[Place] = &[Place::Pointing, Place::Dragging];

const fn bind(keys: &'static [Key], action: Action, help: &'static str, places: &'static [Place]) -> Binding {
    Binding { keys, action, help, places }
}

/// Every key.
pub const BINDINGS: &[Binding] = &[
    bind(&[Key::Down, Key::Char('n')], Action::Step(Step::On), "go to the next in the list", LISTS),
    bind(&[Key::Up, Key::Char('p')], Action::Step(Step::Back), "go to the one before", LISTS),
    bind(&[Key::PageDown, Key::Char(' ')], Action::Step(Step::PageOn), "go a page on", LISTS),
    bind(&[Key::PageUp, Key::Backspace], Action::Step(Step::PageBack), "go a page back", LISTS),
    bind(&[Key::Home, Key::Char('<')], Action::Step(Step::First), "go to the first", LISTS),
    bind(&[Key::End, Key::Char('>')], Action::Step(Step::Last), "go to the last", LISTS),
    bind(
        &[Key::Right, Key::Char('f')],
        Action::Scenario(Step::On),
        "go to the scenario after",
        &[EQUILIBRIA, BESIDE, INTERACTIONS, KNOCK],
    ),
    bind(
        &[Key::Left, Key::Char('b')],
        Action::Scenario(Step::Back),
        "go to the scenario before",
        &[EQUILIBRIA, BESIDE, INTERACTIONS, KNOCK],
    ),
    bind(&[Key::Char(']')], Action::Numbers(Step::On), "see more of the numbers", &[EQUILIBRIA]),
    bind(&[Key::Char('[')], Action::Numbers(Step::Back), "see the numbers before", &[EQUILIBRIA]),
    bind(&[Key::Enter], Action::Accept, "open it", &[CHOOSER]),
    bind(&[Key::Char('t')], Action::Type, "type a path", &[CHOOSER]),
    bind(&[Key::Char('e')], Action::Show(Screen::Equilibria), "show the equilibria of a scenario", STUDY),
    bind(&[Key::Char('s')], Action::Show(Screen::SideBySide), "show scenarios side by side", STUDY),
    bind(&[Key::Char('i')], Action::Show(Screen::Interactions), "show who acts on whom", STUDY),
    bind(&[Key::Char('a')], Action::Show(Screen::Knock), "show what happens after a knock", STUDY),
    bind(&[Key::Char('v')], Action::Show(Screen::Values), "try other values", STUDY),
    bind(&[Key::Char('T')], Action::Show(Screen::Response), "show thresholds as a control varies", STUDY),
    bind(&[Key::Char('o')], Action::Show(Screen::Chooser), "open another model", STUDY),
    bind(&[Key::Char('+'), Key::Char('=')], Action::Closer, "look closer", SKETCH_AND_HOLDS),
    bind(&[Key::Char('-')], Action::Wider, "look wider", SKETCH_AND_HOLDS),
    bind(&[Key::Char('0')], Action::Fit, "show all equilibria and today's stocks", SKETCH_AND_HOLDS),
    bind(&[Key::Char('c')], Action::Centre, "put the selected equilibrium into the middle", SKETCH),
    bind(
        &[Key::Char('d')],
        Action::Drag,
        "drag the sketch with the arrows",
        &[EQUILIBRIA, BESIDE, VALUES, Place::Dragging],
    ),
    bind(
        &[Key::Char('m')],
        Action::Point,
        "move a point with the arrows and see where it goes",
        &[EQUILIBRIA, BESIDE, VALUES, Place::Pointing],
    ),
    bind(
        &[Key::Char('r')],
        Action::Backwards,
        "see where the point came from",
        &[EQUILIBRIA, BESIDE, VALUES, Place::Pointing],
    ),
    bind(
        &[Key::Delete, Key::Char('k')],
        Action::NoPoint,
        "take the point away",
        &[EQUILIBRIA, BESIDE, VALUES, Place::Pointing],
    ),
    bind(&[Key::Char('x')], Action::Species(Axis::Across), "put another species across", SKETCH),
    bind(&[Key::Char('y')], Action::Species(Axis::Upwards), "put another species upwards", SKETCH),
    bind(&[Key::Char('X')], Action::Logarithmic(Axis::Across), "make the axis across logarithmic", SKETCH),
    bind(&[Key::Char('Y')], Action::Logarithmic(Axis::Upwards), "make the axis upwards logarithmic", SKETCH),
    bind(&[Key::Left, Key::Char('b')], Action::Move(Direction::Left), "move left", HOLDS),
    bind(&[Key::Right, Key::Char('f')], Action::Move(Direction::Right), "move right", HOLDS),
    bind(&[Key::Up, Key::Char('p')], Action::Move(Direction::Up), "move up", HOLDS),
    bind(&[Key::Down, Key::Char('n')], Action::Move(Direction::Down), "move down", HOLDS),
    bind(&[Key::Right, Key::Char('f')], Action::Fine(Step::On), "raise the value a little", &[VALUES]),
    bind(&[Key::Left, Key::Char('b')], Action::Fine(Step::Back), "lower the value a little", &[VALUES]),
    bind(&[Key::Char('.')], Action::Coarse(Step::On), "raise the value much", &[VALUES]),
    bind(&[Key::Char(',')], Action::Coarse(Step::Back), "lower the value much", &[VALUES]),
    bind(&[Key::Enter, Key::Char('t')], Action::Type, "type the value", &[VALUES]),
    bind(&[Key::Char('u')], Action::Undo, "take back the last change", &[VALUES]),
    bind(&[Key::Char('U')], Action::Redo, "do it again", &[VALUES]),
    bind(&[Key::Char('g')], Action::Forget, "give up all tried values", &[VALUES]),
    bind(&[Key::Char('N')], Action::Record, "write them as a new scenario, in a copy of the file", &[VALUES]),
    bind(&[Key::Char('O')], Action::OpenCopy, "open the copy that was written last", STUDY),
    bind(&[Key::Char('l')], Action::TakeUp, "take up the values tried last time", STUDY),
    bind(&[Key::Tab], Action::Complete, "complete the path, or write the other thing", &[Place::Typing]),
    bind(&[Key::Tab], Action::Other, "change what is shown", &[BESIDE]),
    bind(&[Key::Tab], Action::Other, "change between direct and net effects", &[INTERACTIONS]),
    bind(&[Key::Char('t')], Action::Absent, "take in the absent species, or leave them out", &[INTERACTIONS]),
    bind(&[Key::Char(']')], Action::Scroll(Direction::Right), "see more columns", &[INTERACTIONS]),
    bind(&[Key::Char('[')], Action::Scroll(Direction::Left), "see the columns before", &[INTERACTIONS]),
    bind(&[Key::Char('}')], Action::Scroll(Direction::Down), "see more rows", &[INTERACTIONS]),
    bind(&[Key::Char('{')], Action::Scroll(Direction::Up), "see the rows before", &[INTERACTIONS]),
    bind(&[Key::Tab], Action::Other, "hit another species, or start from the point", &[KNOCK]),
    bind(&[Key::Char('.')], Action::Knock(Step::On), "take less, or add more", &[KNOCK]),
    bind(&[Key::Char(',')], Action::Knock(Step::Back), "take more, or add less", &[KNOCK]),
    bind(&[Key::Char(']')], Action::Scroll(Direction::Down), "see more species", &[KNOCK]),
    bind(&[Key::Char('[')], Action::Scroll(Direction::Up), "see the species before", &[KNOCK]),
    bind(&[Key::Right, Key::Char('f')], Action::Fine(Step::On), "move the rule a little to the right", &[RESPONSE]),
    bind(&[Key::Left, Key::Char('b')], Action::Fine(Step::Back), "move the rule a little to the left", &[RESPONSE]),
    bind(&[Key::Char('.')], Action::Coarse(Step::On), "move the rule much to the right", &[RESPONSE]),
    bind(&[Key::Char(',')], Action::Coarse(Step::Back), "move the rule much to the left", &[RESPONSE]),
    bind(&[Key::Char(']')], Action::Threshold(Step::On), "jump to the threshold after", &[RESPONSE]),
    bind(&[Key::Char('[')], Action::Threshold(Step::Back), "jump to the threshold before", &[RESPONSE]),
    bind(&[Key::Char('0')], Action::Fit, "put the rule back to the present value", &[RESPONSE]),
    bind(&[Key::Tab], Action::Other, "vary another control", &[RESPONSE]),
    bind(&[Key::Char('y')], Action::Species(Axis::Upwards), "draw another quantity upwards", &[RESPONSE]),
    bind(&[Key::Char(')')], Action::Numbers(Step::On), "see more of the numbers", &[RESPONSE]),
    bind(&[Key::Char('(')], Action::Numbers(Step::Back), "see the numbers before", &[RESPONSE]),
    bind(&[Key::Char('t')], Action::TakeOver, "try the value at the rule", &[RESPONSE]),
    bind(&[Key::Char('}')], Action::Scenario(Step::On), "go to the scenario after", &[RESPONSE]),
    bind(&[Key::Char('{')], Action::Scenario(Step::Back), "go to the scenario before", &[RESPONSE]),
    bind(&[Key::Char('w')], Action::Write, "write what the screen shows to a file", STUDY),
    bind(&[Key::Char('R')], Action::Reload, "read the model file again", STUDY),
    bind(&[Key::Char('h'), Key::Char('?')], Action::Help, "show these keys, or hide them", BUT_TYPING),
    bind(&[Key::Char('h'), Key::Char('?')], Action::Stop, "go back", &[Place::Reading]),
    bind(&[Key::Escape], Action::Stop, "go back, or stop what is under way", ANYWHERE),
    bind(&[Key::Enter], Action::Stop, "done", &[Place::Pointing, Place::Dragging, Place::Reading]),
    bind(&[Key::Enter], Action::Accept, "take what is typed", &[Place::Typing]),
    bind(&[Key::Redraw], Action::Redraw, "draw the screen anew", ANYWHERE),
    bind(&[Key::Suspend], Action::Suspend, "pause the program", ANYWHERE),
    bind(
        &[Key::Char('q')],
        Action::Leave,
        "leave",
        &[
            CHOOSER,
            EQUILIBRIA,
            BESIDE,
            INTERACTIONS,
            KNOCK,
            VALUES,
            RESPONSE,
            Place::Pointing,
            Place::Dragging,
            Place::Reading,
        ],
    ),
    bind(&[Key::Interrupt], Action::Leave, "leave", ANYWHERE),
];

/// What a key means in a place.
pub fn lookup(place: Place, key: Key) -> Option<Action> {
    of(place).find(|binding| binding.keys.contains(&key)).map(|binding| binding.action)
}

/// All that is bound in a place.
pub fn of(place: Place) -> impl Iterator<Item = &'static Binding> {
    BINDINGS.iter().filter(move |binding| binding.places.contains(&place))
}

/// The first key of an action in a place, as help names it.
pub fn key_of(place: Place, action: Action) -> Option<String> {
    of(place).find(|binding| binding.action == action).and_then(|binding| binding.keys.first()).map(|key| key.name())
}

/// Where the keys go just now.
pub fn place(app: &App) -> Place {
    match &app.dialog {
        Some(Dialog::Help { .. } | Dialog::Message { .. }) => Place::Reading,
        Some(Dialog::Entry(_)) => Place::Typing,
        None => match app.hold() {
            Some(Hold::Point) => Place::Pointing,
            Some(Hold::Window) => Place::Dragging,
            None => Place::On(app.screen),
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_key_means_two_things_in_one_place() {
        for &place in ANYWHERE {
            let keys: Vec<Key> = of(place).flat_map(|binding| binding.keys).copied().collect();
            for (k, key) in keys.iter().enumerate() {
                assert!(!keys[..k].contains(key), "{} means two things in {place:?}", key.name());
            }
        }
    }

    #[test]
    fn every_place_can_be_left_and_helped() {
        for &place in ANYWHERE {
            assert_eq!(lookup(place, Key::Escape), Some(Action::Stop), "{place:?}");
            assert_eq!(lookup(place, Key::Interrupt), Some(Action::Leave), "{place:?}");
            let help = lookup(place, Key::Char('h'));
            assert!(place == Place::Typing || matches!(help, Some(Action::Help | Action::Stop)), "{place:?}");
        }
    }

    #[test]
    fn arrows_have_letters_beside_them() {
        for binding in BINDINGS {
            let has_arrow = binding.keys.iter().any(|key| matches!(key, Key::Up | Key::Down | Key::Left | Key::Right));
            let has_letter = binding.keys.iter().any(|key| matches!(key, Key::Char(_)));
            assert!(!has_arrow || has_letter, "{}", binding.help);
            assert!(binding.help.len() <= 52, "{}", binding.help);
            assert!(!binding.keys.contains(&Key::Char('~')), "a line may take it");
        }
    }
}
