//! What is wrong with a file that cannot be read, in words for the person.

use super::Unreadable;
use quick_xml::Reader;
use quick_xml::events::Event;

/// The name of the innermost element still open at the end of a file cut short.
pub(super) fn last_open(source: &str) -> String {
    let mut reader = Reader::from_str(source);
    let mut open = Vec::new();
    loop {
        match reader.read_event() {
            Ok(Event::Start(e)) => open.push(e.name().as_ref().to_string()),
            Ok(Event::End(_)) => {
                open.pop();
            }
            Ok(Event::Eof) | Err(_) => return open.pop().unwrap_or_default(),
            Ok(_) => {}
        }
    }
}

/// What can go wrong between two events.
pub(super) enum Trouble {
    Xml(quick_xml::Error),
    Told(Unreadable),
}

impl From<quick_xml::Error> for Trouble {
    fn from(error: quick_xml::Error) -> Trouble {
        Trouble::Xml(error)
    }
}

pub(super) fn not_well_formed(source: &str, at: usize, reason: &str) -> Unreadable {
    let before = &source.as_bytes()[..at.min(source.len())];
    let line = 1 + memchr::memchr_iter(b'\n', before).count();
    Unreadable::new(format!(
        "is not well-formed XML near line {line}: {reason}; download or export it again"
    ))
}
