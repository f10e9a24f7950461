//! What is said of arguments that cannot be: one sentence, and the one help page that goes with it.

use std::ffi::OsString;
use std::path::Path;

use clap::error::{ContextKind, ContextValue, ErrorKind};

/// The commands.
const COMMANDS: [&str; 4] = ["read", "recheck", "windows", "help"];

/// A name is suggested from this likeness on; 1 is the same name.
const ALIKE: f64 = 0.8;

/// So many letters or more that stand anywhere in a name are like it: 'chebyshev' in 'dolph-chebyshev'.
const LEAST_PART: usize = 4;

/// The name among `names` that `given` was most likely meant to be; none where nothing is like it.
///
/// Jaro and Winkler's measure counts an equal beginning for more than an equal length: 'hanning' is 'hann', which a
/// count of letters to change takes for 'hamming'.
pub(super) fn nearest<'a>(given: &str, names: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let given = given.trim().to_lowercase();
    let part_of = |name: &str| given.len() >= LEAST_PART && name.contains(&given);
    let likeness = |name: &str| strsim::jaro_winkler(&given, name).max(if part_of(name) { ALIKE } else { 0.0 });
    let best = names.into_iter().map(|name| (likeness(name), name)).max_by(|a, b| a.0.total_cmp(&b.0))?;
    (best.0 >= ALIKE).then_some(best.1)
}

/// What is said of arguments that were refused.
pub(super) fn told(error: &clap::Error, arguments: &[OsString]) -> String {
    let given: Vec<_> = arguments.iter().skip(1).map(|a| a.to_string_lossy()).collect();
    let command = given.iter().find(|a| COMMANDS.contains(&a.as_ref()));
    if let Some((first, more)) = given.split_first()
        && !COMMANDS.contains(&first.as_ref())
        && !first.starts_with('-')
    {
        if is_no_command(first) && !more.is_empty() {
            return no_command(first);
        }
        if let Some(command) = command {
            return format!("a command comes first, as in 'panewise {command} {first}'");
        }
    }
    if let Some(near) = error.get(ContextKind::SuggestedArg)
        && let Some(given) = error.get(ContextKind::InvalidArg)
    {
        return format!("there is no option '{given}': did you mean '{near}'?");
    }
    let said = sentence(error);
    // What is wrong with a value says itself what would be right.
    if error.kind() == ErrorKind::ValueValidation {
        return said;
    }
    let page = command.filter(|command| *command != "help").map(|command| format!("{command} "));
    format!("{said}: see 'panewise {}--help'", page.unwrap_or_default())
}

/// What is said of a word alone that is neither a command nor a file.
pub(super) fn no_start(start: &Path) -> Option<String> {
    let word = start.to_string_lossy();
    (is_no_command(&word) && !start.exists()).then(|| no_command(&word))
}

/// Whether a first argument was meant as a command, and is none: a bare word, not a path with a folder or an ending.
fn is_no_command(first: &str) -> bool {
    let bare = !first.is_empty() && first.chars().all(|c| c.is_alphabetic() || c == '-') && !first.starts_with('-');
    bare && !COMMANDS.contains(&first)
}

fn no_command(word: &str) -> String {
    let advice = match nearest(word, COMMANDS) {
        Some(command) => format!("did you mean '{command}'?"),
        None => "see 'panewise --help'".to_owned(),
    };
    format!("no command is called '{word}': {advice}")
}

/// The error in one sentence, without what goes with it on a terminal.
fn sentence(error: &clap::Error) -> String {
    if error.kind() == ErrorKind::UnknownArgument
        && let Some(ContextValue::String(given)) = error.get(ContextKind::InvalidArg)
    {
        return if given.starts_with('-') {
            format!("there is no option '{given}'")
        } else {
            format!("'{given}' is one argument too many")
        };
    }
    let text = error.render().to_string();
    let lines = text.lines().map(str::trim).take_while(|line| !line.starts_with("Usage:"));
    let idle = |line: &str| ["For more information", "tip: "].iter().any(|start| line.starts_with(start));
    let told: Vec<_> = lines.filter(|line| !line.is_empty() && !idle(line)).collect();
    let told = told.join(" ");
    told.strip_prefix("error: ").unwrap_or(&told).to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::window::catalogue;

    #[test]
    fn a_name_written_otherwise_finds_its_window() {
        for (given, meant) in [
            ("flattop", "flat-top"),
            ("Flat_Top", "flat-top"),
            ("gauss", "gaussian"),
            ("hanning", "hann"),
            ("han", "hann"),
            ("haming", "hamming"),
            ("blackmanharris", "blackman-harris"),
            ("kaiser-bessel", "kaiser"),
            ("rect", "rectangular"),
            ("chebyshev", "dolph-chebyshev"),
            ("exp", "exponential"),
        ] {
            assert_eq!(nearest(given, catalogue().iter().map(|entry| entry.name)), Some(meant), "{given}");
        }
        assert_eq!(nearest("zzz", ["hann", "hamming"]), None);
        assert_eq!(nearest("hann", []), None);
    }

    #[test]
    fn only_a_bare_word_is_taken_for_a_command() {
        for word in ["raed", "analyse", "re-check"] {
            assert!(is_no_command(word), "{word}");
        }
        for word in ["", "read", "pump2.wav", "site/pump", "--help", "2026"] {
            assert!(!is_no_command(word), "{word}");
        }
    }
}
