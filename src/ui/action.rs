//! Everything that can be done from a menu or a key, once: menus and the sheet of keys are made from this list.

use eframe::egui::{self, Key, KeyboardShortcut, Modifiers};

/// Something that can be done.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub(super) enum Action {
    OpenCapture,
    OpenPath,
    OpenSession,
    OpenDemonstration,
    Undo,
    Redo,
    Save,
    SaveAs,
    SavePath,
    Quit,
    UseSuggestion,
    NextSuggestion,
    AddSegment,
    NextSegment,
    MarkAll,
    WholePeriods,
    RemoveSegment,
    ShowSegment,
    ShowCapture,
    ZoomIn,
    ZoomOut,
    PanLeft,
    PanRight,
    FullRange,
    FitTone,
    ToggleLog,
    FitLevel,
    AddPane,
    ChooseWindow,
    PaneLeft,
    PaneRight,
    RemovePane,
    EnlargePane,
    ShowResidue,
    UseAdvised,
    AddAdvised,
    NextTone,
    PreviousTone,
    HairlineToTone,
    Unpick,
    NameTone,
    TakeBackTone,
    HoldTone,
    RefuseTone,
    Overrule,
    PinFundamental,
    NoteTone,
    CardDown,
    CardUp,
    CopyTable,
    ToggleSetup,
    ToggleSkirts,
    ToggleSmallest,
    Larger,
    Smaller,
    NormalSize,
    Keys,
    About,
}

impl Action {
    /// Whether doing it again goes on a step further.
    fn is_a_step(self) -> bool {
        matches!(
            self,
            Self::NextTone
                | Self::PreviousTone
                | Self::ZoomIn
                | Self::ZoomOut
                | Self::PanLeft
                | Self::PanRight
                | Self::Undo
                | Self::Redo
                | Self::NextSegment
                | Self::NextSuggestion
                | Self::CardDown
                | Self::CardUp
        )
    }
}

/// A menu of the menu bar, in the order of the job.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Menu {
    Capture,
    Segment,
    Panes,
    Tones,
    View,
    Help,
}

impl Menu {
    pub(super) const ALL: [Self; 6] = [Self::Capture, Self::Segment, Self::Panes, Self::Tones, Self::View, Self::Help];

    pub(super) fn title(self) -> &'static str {
        match self {
            Self::Capture => "Capture",
            Self::Segment => "Segment",
            Self::Panes => "Panes",
            Self::Tones => "Tones",
            Self::View => "View",
            Self::Help => "Help",
        }
    }
}

/// One action as menus and the sheet of keys show it.
#[derive(Debug)]
pub(super) struct Entry {
    pub(super) action: Action,
    pub(super) menu: Menu,
    pub(super) name: &'static str,
    pub(super) key: Option<KeyboardShortcut>,
    /// Whether the key also types: then it does nothing while a text is typed.
    pub(super) types: bool,
    /// Whether a capture has to be open.
    pub(super) needs_capture: bool,
}

const CTRL: Modifiers = Modifiers::COMMAND;
const CTRL_SHIFT: Modifiers = Modifiers::COMMAND.plus(Modifiers::SHIFT);
const PLAIN: Modifiers = Modifiers::NONE;
const ALT: Modifiers = Modifiers::ALT;

const fn entry(action: Action, menu: Menu, name: &'static str, key: Option<(Modifiers, Key)>) -> Entry {
    let (key, types) = match key {
        Some((modifiers, key)) => {
            (Some(KeyboardShortcut::new(modifiers, key)), !modifiers.command && !matches!(key, Key::F1 | Key::F9))
        }
        None => (None, false),
    };
    Entry { action, menu, name, key, types, needs_capture: true }
}

const fn always(action: Action, menu: Menu, name: &'static str, key: Option<(Modifiers, Key)>) -> Entry {
    Entry { needs_capture: false, ..entry(action, menu, name, key) }
}

/// All of it, in the order of the menus.
pub(super) static ENTRIES: &[Entry] = &[
    always(Action::OpenCapture, Menu::Capture, "Open…", Some((CTRL, Key::O))),
    always(Action::OpenPath, Menu::Capture, "Open by path…", Some((CTRL, Key::L))),
    always(Action::OpenSession, Menu::Capture, "Open session…", Some((CTRL_SHIFT, Key::O))),
    always(Action::OpenDemonstration, Menu::Capture, "Open the demonstration capture", None),
    entry(Action::Save, Menu::Capture, "Save session", Some((CTRL, Key::S))),
    entry(Action::SaveAs, Menu::Capture, "Save session as…", Some((CTRL_SHIFT, Key::S))),
    entry(Action::SavePath, Menu::Capture, "Save session by path…", Some((CTRL_SHIFT, Key::L))),
    entry(Action::Undo, Menu::Capture, "Undo", Some((CTRL, Key::Z))),
    entry(Action::Redo, Menu::Capture, "Redo", Some((CTRL_SHIFT, Key::Z))),
    always(Action::Quit, Menu::Capture, "Quit", Some((CTRL, Key::Q))),
    entry(Action::UseSuggestion, Menu::Segment, "Mark the steady stretch", Some((CTRL, Key::M))),
    entry(Action::NextSuggestion, Menu::Segment, "Next suggested stretch", Some((PLAIN, Key::J))),
    entry(Action::MarkAll, Menu::Segment, "Mark the whole capture", None),
    entry(Action::WholePeriods, Menu::Segment, "Whole periods of the picked tone", Some((PLAIN, Key::K))),
    entry(Action::AddSegment, Menu::Segment, "Add a segment", Some((CTRL_SHIFT, Key::M))),
    entry(Action::NextSegment, Menu::Segment, "Next segment", Some((CTRL, Key::J))),
    entry(Action::RemoveSegment, Menu::Segment, "Remove this segment", None),
    entry(Action::ShowSegment, Menu::Segment, "Zoom the strip to the segment", Some((PLAIN, Key::Z))),
    entry(Action::ShowCapture, Menu::Segment, "Show the whole capture", Some((Modifiers::SHIFT, Key::Z))),
    entry(Action::AddPane, Menu::Panes, "Add a pane…", Some((PLAIN, Key::Insert))),
    entry(Action::ChooseWindow, Menu::Panes, "Choose this pane's window…", Some((PLAIN, Key::W))),
    entry(Action::ZoomIn, Menu::Panes, "Zoom in", Some((PLAIN, Key::Plus))),
    entry(Action::ZoomOut, Menu::Panes, "Zoom out", Some((PLAIN, Key::Minus))),
    entry(Action::PanLeft, Menu::Panes, "Lower frequencies", Some((ALT, Key::ArrowLeft))),
    entry(Action::PanRight, Menu::Panes, "Higher frequencies", Some((ALT, Key::ArrowRight))),
    entry(Action::FullRange, Menu::Panes, "Full range", Some((PLAIN, Key::A))),
    entry(Action::FitTone, Menu::Panes, "Fit to the picked tone", Some((PLAIN, Key::T))),
    entry(Action::ToggleLog, Menu::Panes, "Logarithmic frequency", Some((PLAIN, Key::L))),
    entry(Action::FitLevel, Menu::Panes, "Fit the level axis", Some((PLAIN, Key::V))),
    entry(Action::EnlargePane, Menu::Panes, "Enlarge this pane, or put it back", Some((PLAIN, Key::E))),
    entry(Action::ShowResidue, Menu::Panes, "Residue in this pane, or the segment", Some((PLAIN, Key::R))),
    entry(Action::UseAdvised, Menu::Panes, "Advised window in this pane", Some((PLAIN, Key::G))),
    entry(Action::AddAdvised, Menu::Panes, "Advised window in a new pane", Some((Modifiers::SHIFT, Key::G))),
    entry(Action::PaneLeft, Menu::Panes, "Move this pane forward", Some((CTRL_SHIFT, Key::ArrowLeft))),
    entry(Action::PaneRight, Menu::Panes, "Move this pane back", Some((CTRL_SHIFT, Key::ArrowRight))),
    entry(Action::RemovePane, Menu::Panes, "Remove this pane", Some((PLAIN, Key::Delete))),
    entry(Action::NextTone, Menu::Tones, "Next tone", Some((PLAIN, Key::N))),
    entry(Action::PreviousTone, Menu::Tones, "Previous tone", Some((PLAIN, Key::P))),
    entry(Action::HairlineToTone, Menu::Tones, "Hairline to the picked tone", Some((PLAIN, Key::H))),
    entry(Action::Unpick, Menu::Tones, "Pick none", Some((PLAIN, Key::U))),
    entry(Action::NameTone, Menu::Tones, "Name a tone at the hairline", Some((CTRL, Key::T))),
    entry(Action::TakeBackTone, Menu::Tones, "Take back the named tone", Some((PLAIN, Key::Backspace))),
    entry(Action::HoldTone, Menu::Tones, "Hold the picked tone's frequency", Some((CTRL, Key::H))),
    entry(Action::RefuseTone, Menu::Tones, "Refuse the picked tone…", Some((PLAIN, Key::X))),
    entry(Action::Overrule, Menu::Tones, "Overrule the picked tone's verdict…", Some((PLAIN, Key::O))),
    entry(Action::PinFundamental, Menu::Tones, "Pin the picked tone as fundamental", Some((PLAIN, Key::F))),
    entry(Action::NoteTone, Menu::Tones, "Note on the picked tone…", Some((CTRL, Key::N))),
    entry(Action::CardDown, Menu::Tones, "Scroll the picked tone's card on", Some((PLAIN, Key::PageDown))),
    entry(Action::CardUp, Menu::Tones, "Scroll the picked tone's card back", Some((PLAIN, Key::PageUp))),
    entry(Action::CopyTable, Menu::Tones, "Copy the table as text", Some((CTRL_SHIFT, Key::T))),
    always(Action::ToggleSetup, Menu::View, "Setup column", Some((PLAIN, Key::F9))),
    entry(Action::ToggleSkirts, Menu::View, "Skirts", Some((PLAIN, Key::S))),
    entry(Action::ToggleSmallest, Menu::View, "Smallest tone that would be seen", Some((PLAIN, Key::Y))),
    always(Action::Larger, Menu::View, "Larger", Some((CTRL, Key::Plus))),
    always(Action::Smaller, Menu::View, "Smaller", Some((CTRL, Key::Minus))),
    always(Action::NormalSize, Menu::View, "Normal size", Some((CTRL, Key::Num0))),
    always(Action::Keys, Menu::Help, "Keys", Some((PLAIN, Key::F1))),
    always(Action::About, Menu::Help, "About Panewise", None),
];

/// The action's entry.
pub(super) fn entry_of(action: Action) -> Option<&'static Entry> {
    ENTRIES.iter().find(|e| e.action == action)
}

/// The actions whose keys were pressed. Keys with more modifiers are looked at first, since a key with fewer would
/// match them too; keys that type are left alone while `typing`.
pub(super) fn pressed(ctx: &egui::Context, typing: bool) -> Vec<Action> {
    let mut keyed: Vec<_> = ENTRIES.iter().filter_map(|e| e.key.map(|key| (e, key))).collect();
    let weight = |m: Modifiers| u8::from(m.command) + u8::from(m.shift) + u8::from(m.alt);
    keyed.sort_by_key(|(_, key)| std::cmp::Reverse(weight(key.modifiers)));
    let mut actions = Vec::new();
    ctx.input_mut(|input| {
        for (entry, key) in keyed {
            if typing && entry.types {
                continue;
            }
            let mut n = input.count_and_consume_key(key.modifiers, key.logical_key);
            if key.logical_key == Key::Plus {
                n += input.count_and_consume_key(key.modifiers, Key::Equals);
            }
            // A key held down may come more than once in a frame: a step is then taken as often.
            let n = if entry.action.is_a_step() { n } else { n.min(1) };
            actions.extend(std::iter::repeat_n(entry.action, n));
        }
    });
    actions
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_action_stands_once_and_no_key_twice() {
        for (i, a) in ENTRIES.iter().enumerate() {
            for b in &ENTRIES[i + 1..] {
                assert_ne!(a.action, b.action);
                assert!(a.key.is_none() || a.key != b.key, "{} and {}", a.name, b.name);
                assert_ne!(a.name, b.name);
            }
        }
    }
}
