//! How many forms a page draws, counting those that forms draw inside themselves. A few hundred
//! bytes can ask for billions, and as the engine calls nobody between two forms without ink, that
//! has to be known before it starts.

use hayro_syntax::content::TypedIter;
use hayro_syntax::content::ops::TypedInstruction;
use hayro_syntax::object::dict::keys::{RESOURCES, SUBTYPE};
use hayro_syntax::object::{Dict, Name, ObjectIdentifier, Stream};
use hayro_syntax::page::{Page, Resources};
use std::collections::HashMap;

/// The engine goes no deeper.
const DEPTH: usize = 50;

/// The forms of one document, each looked into once.
#[derive(Default)]
pub struct Forms {
    /// The forms that a form draws, with repetition.
    draws: HashMap<ObjectIdentifier, Vec<(ObjectIdentifier, u64)>>,
}

impl Forms {
    /// The number of forms that are drawn for the page.
    pub fn drawn_on(&mut self, page: &Page<'_>) -> u64 {
        let resources = page.resources();
        let top = self.inside(page.page_stream().unwrap_or_default(), resources);
        // Level by level: how often each form is drawn at that depth.
        let mut level: HashMap<ObjectIdentifier, u64> = HashMap::new();
        for (form, times) in top {
            *level.entry(form).or_default() += times;
        }
        let mut sum: u64 = 0;
        for _ in 0..DEPTH {
            let mut next: HashMap<ObjectIdentifier, u64> = HashMap::new();
            for (form, times) in &level {
                sum = sum.saturating_add(*times);
                for (inner, each) in self.draws.get(form).into_iter().flatten() {
                    let count = next.entry(*inner).or_default();
                    *count = count.saturating_add(each.saturating_mul(*times));
                }
            }
            level = next;
        }
        sum
    }

    /// The forms that a content draws; looks into those not seen before.
    fn inside(&mut self, content: &[u8], resources: &Resources<'_>) -> Vec<(ObjectIdentifier, u64)> {
        let mut todo = Vec::new();
        let out = drawn(content, resources, &mut todo);
        // No recursion, as the depth is the file's choice.
        while let Some(form) = todo.pop() {
            let id = form.obj_id();
            if self.draws.contains_key(&id) {
                continue;
            }
            self.draws.insert(id, Vec::new());
            let Ok(content) = form.decoded_data() else {
                continue;
            };
            let own = form.dict().get::<Dict<'_>>(RESOURCES).map(Resources::new);
            let inner = drawn(&content, own.as_ref().unwrap_or(resources), &mut todo);
            self.draws.insert(id, inner);
        }
        out
    }
}

fn drawn<'a>(
    content: &[u8],
    resources: &Resources<'a>,
    found: &mut Vec<Stream<'a>>,
) -> Vec<(ObjectIdentifier, u64)> {
    let mut times: HashMap<Vec<u8>, u64> = HashMap::new();
    // Most contents draw no form at all: a look for the operator is much cheaper than parsing.
    if resources.x_objects.is_empty() || memchr::memmem::find(content, b"Do").is_none() {
        return Vec::new();
    }
    let mut iter = TypedIter::new(content);
    while let Some(instruction) = iter.next() {
        if let TypedInstruction::XObject(x) = instruction {
            *times.entry(x.0.to_vec()).or_default() += 1;
        }
    }
    let mut out = Vec::new();
    for (name, times) in times {
        let Some(stream) = resources.x_objects.get::<Stream<'a>>(name.as_slice()) else {
            continue;
        };
        if stream.dict().get::<Name<'_>>(SUBTYPE).as_deref() == Some(b"Form") {
            out.push((stream.obj_id(), times));
            found.push(stream);
        }
    }
    out
}
