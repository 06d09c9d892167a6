//! How many forms a page draws, counting those that forms draw inside themselves. A few hundred
//! bytes can ask for billions, and as the engine calls nobody between two forms without ink, that
//! has to be known before it starts.

use hayro_syntax::content::TypedIter;
use hayro_syntax::content::ops::TypedInstruction;
use hayro_syntax::object::dict::keys::{CHAR_PROCS, RESOURCES, SUBTYPE, TYPE3};
use hayro_syntax::object::{Dict, Name, ObjectIdentifier, Stream};
use hayro_syntax::page::{Page, Resources};
use std::collections::{HashMap, HashSet};

/// The engine goes no deeper.
const DEPTH: usize = 50;

/// The forms of one document, each looked into once.
#[derive(Default)]
pub struct Forms {
    /// The forms that a form draws, with repetition.
    draws: HashMap<ObjectIdentifier, Vec<(ObjectIdentifier, u64)>>,
    /// The fonts whose glyphs were looked into.
    fonts: HashSet<ObjectIdentifier>,
    /// Some glyph of a font draws forms.
    by_glyphs: bool,
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

    /// Whether any glyph on the pages seen so far draws forms, which are not counted: such glyphs are
    /// better left undrawn.
    pub fn drawn_by_glyphs(&self) -> bool {
        self.by_glyphs
    }

    /// Looks for forms in the glyphs of fonts that are drawn by instructions.
    fn look_into_fonts(&mut self, resources: &Resources<'_>) {
        for name in resources.fonts.keys() {
            let Some(font) = resources.fonts.get::<Dict<'_>>(&*name) else {
                continue;
            };
            if font.get::<Name<'_>>(SUBTYPE).as_deref() != Some(TYPE3)
                || font.obj_id().is_some_and(|id| !self.fonts.insert(id))
            {
                continue;
            }
            let Some(glyphs) = font.get::<Dict<'_>>(CHAR_PROCS) else {
                continue;
            };
            self.by_glyphs |= glyphs.keys().any(|name| {
                let content = glyphs.get::<Stream<'_>>(&*name).map(|s| s.decoded_data());
                matches!(content, Some(Ok(content)) if may_draw_forms(&content))
            });
        }
    }

    /// The forms that a content draws; looks into those not seen before.
    fn inside(&mut self, content: &[u8], resources: &Resources<'_>) -> Vec<(ObjectIdentifier, u64)> {
        let mut todo = Vec::new();
        self.look_into_fonts(resources);
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
            if let Some(own) = &own {
                self.look_into_fonts(own);
            }
            let inner = drawn(&content, own.as_ref().unwrap_or(resources), &mut todo);
            self.draws.insert(id, inner);
        }
        out
    }
}

/// Whether the operator stands in the content, apart from its neighbours, as bitmaps may hold its two
/// letters by chance.
fn may_draw_forms(content: &[u8]) -> bool {
    memchr::memmem::find_iter(content, b"Do").any(|at| {
        let before = at.checked_sub(1).map(|b| content[b]);
        let after = content.get(at + 2).copied();
        [before, after]
            .into_iter()
            .flatten()
            .all(|b| b.is_ascii_whitespace())
    })
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
