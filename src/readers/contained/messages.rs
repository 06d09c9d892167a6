//! What the pool and its workers say to each other, through the pipes that are the worker's standard
//! input and output. A *message* is its length (four bytes, little end first) and then that many
//! bytes in the postcard encoding. The pool begins with the [`Limits`](super::Limits); then each
//! [`Task`], followed by the bytes of the file, gets one answer.
//!
//! Neither side believes the other's lengths: each message has a largest size.

use crate::manuscript::Manuscript;
use crate::readers::Way;
use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};
use std::io::{self, ErrorKind, Read, Write};

/// The largest message to a worker; the bytes of the file come behind it.
pub const LARGEST_TASK: u64 = 64 << 10;

/// One file to read.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Task {
    pub way: Way,
    /// The name of the file: its extension can matter.
    pub name: String,
    /// Bytes of the file that follow.
    pub size: u64,
}

/// What a worker says.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub enum Said {
    /// The manuscript.
    Manuscript(Box<Manuscript>),
    /// Why there is none, for the person.
    Unreadable(String),
    /// The usual way has failed; the format has another.
    TryRescue,
    /// The manuscript is larger than allowed.
    TooLarge,
    /// No answer yet, but a hint: memory was asked for beyond the limit, and refused. Some who ask
    /// can do without, others end the process; then this was why.
    MemoryRefused,
}

/// One message of a worker.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Answer {
    pub said: Said,
    /// The most bytes that were allocated at one moment since the last answer.
    pub peak: u64,
}

/// The message as it is written.
pub fn encoded(message: &impl Serialize) -> io::Result<Vec<u8>> {
    let mut frame = vec![0; 4];
    postcard::to_io(message, &mut frame).map_err(io::Error::other)?;
    let size = u32::try_from(frame.len() - 4).map_err(io::Error::other)?;
    frame[..4].copy_from_slice(&size.to_le_bytes());
    Ok(frame)
}

/// Reads a message of at most `largest` bytes.
///
/// # Errors
/// [`ErrorKind::UnexpectedEof`] if the other side is gone, [`ErrorKind::FileTooLarge`] if the message
/// is larger, [`ErrorKind::InvalidData`] if it makes no sense.
pub fn read<T: DeserializeOwned>(from: &mut impl Read, largest: u64) -> io::Result<T> {
    let mut size = [0; 4];
    from.read_exact(&mut size)?;
    let size = u64::from(u32::from_le_bytes(size));
    if size > largest {
        return Err(ErrorKind::FileTooLarge.into());
    }
    let bytes = read_bytes(from, size)?;
    postcard::from_bytes(&bytes).map_err(|e| io::Error::new(ErrorKind::InvalidData, e))
}

/// Reads exactly so many bytes.
pub fn read_bytes(from: &mut impl Read, size: u64) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    let room = usize::try_from(size).map_err(io::Error::other)?;
    bytes
        .try_reserve_exact(room)
        .map_err(|_| ErrorKind::OutOfMemory)?;
    from.take(size).read_to_end(&mut bytes)?;
    if (bytes.len() as u64) < size {
        return Err(ErrorKind::UnexpectedEof.into());
    }
    Ok(bytes)
}

/// Writes a task and the bytes of its file.
pub fn write_task(to: &mut impl Write, task: &Task, bytes: &[u8]) -> io::Result<()> {
    to.write_all(&encoded(task)?)?;
    to.write_all(bytes)?;
    to.flush()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn kind<T: std::fmt::Debug>(result: io::Result<T>) -> ErrorKind {
        result.expect_err("must be refused").kind()
    }

    #[test]
    fn messages_arrive_as_they_were_sent() {
        let task = Task {
            way: Way::Rescue,
            name: "Gießkanne.pdf".into(),
            size: 3,
        };
        let mut pipe = Vec::new();
        write_task(&mut pipe, &task, b"abc").unwrap();
        let said = Answer {
            said: Said::Unreadable("is empty".into()),
            peak: 70_000,
        };
        pipe.extend(encoded(&said).unwrap());
        let mut from = pipe.as_slice();
        assert_eq!(read::<Task>(&mut from, LARGEST_TASK).unwrap(), task);
        assert_eq!(read_bytes(&mut from, 3).unwrap(), b"abc");
        assert_eq!(read::<Answer>(&mut from, 100).unwrap(), said);
        assert_eq!(kind(read::<Answer>(&mut from, 100)), ErrorKind::UnexpectedEof);
    }

    #[test]
    fn what_is_cut_off_too_large_or_nonsense_is_refused() {
        let whole = encoded(&Answer {
            said: Said::Unreadable("is empty".into()),
            peak: 1,
        })
        .unwrap();
        for cut in 0..whole.len() {
            assert_eq!(
                kind(read::<Answer>(&mut &whole[..cut], 100)),
                ErrorKind::UnexpectedEof,
                "{cut}"
            );
        }
        assert_eq!(
            kind(read::<Answer>(&mut whole.as_slice(), 5)),
            ErrorKind::FileTooLarge
        );
        let mut nonsense = whole.clone();
        nonsense[4] = 99;
        assert_eq!(
            kind(read::<Answer>(&mut nonsense.as_slice(), 100)),
            ErrorKind::InvalidData
        );
    }
}
