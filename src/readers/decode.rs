//! From bytes to text.
use super::Unreadable;
use std::borrow::Cow;

/// Text of a file without its own declaration of encoding.
pub fn text(bytes: &[u8]) -> Result<Cow<'_, str>, Unreadable> {
    Ok(String::from_utf8_lossy(bytes))
}

/// Text of an XML file.
pub fn xml(bytes: &[u8]) -> Result<Cow<'_, str>, Unreadable> {
    text(bytes)
}
