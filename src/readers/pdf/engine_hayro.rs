//! The engine: hayro interprets the pages, and what it draws is taken down as [`Glyphs`].
//!
//! A page can ask for endless work in a few bytes (forms that draw each other many times over).
//! Every call of the engine is counted, and beyond [`Limits`] the page is given up by unwinding
//! through the engine, which has no other way to be stopped.

use super::afterwards;
use super::engine_paths;
use super::engine_type3::Bounds;
use super::fractions;
use super::glyphs::{Area, FontUse, Glyph, Glyphs, Meaning, PageGlyphs, Shape, Step, Turn, span};
use super::nesting::Forms;
use super::replaced;
use hayro_interpret::font::{Glyph as Drawn, GlyphIdentifier, GlyphRun};
use hayro_interpret::hayro_cmap::BfString;
use hayro_interpret::kurbo::{Affine, BezPath, PathEl, Point, Rect, Shape as _};
use hayro_interpret::{
    BlendMode, ClipPath, Context, Device, DrawMode, DrawProps, Image, ImageDrawProps, InterpreterCache,
    InterpreterSettings, Paint, RenderContent, SoftMask, TransformExt, interpret_page,
};
use hayro_syntax::object::Dict;
use hayro_syntax::object::dict::keys::{ACTUAL_TEXT, USER_UNIT};
use hayro_syntax::page::Page;
use hayro_syntax::{DecryptionError, LoadPdfError, Pdf};
use rustc_hash::FxHashMap;
use std::hash::{Hash, Hasher};
use std::panic::{AssertUnwindSafe, catch_unwind, resume_unwind};
use std::time::{Duration, Instant};

/// How much work one file may ask for.
#[derive(Clone, Copy, Debug)]
pub struct Limits {
    pub pages: usize,
    /// Glyphs, paths, images and clips on one page.
    pub calls_per_page: u64,
    /// Glyphs on one page; a full page of small print has about ten thousand.
    pub glyphs_per_page: usize,
    /// Forms drawn for one page, those drawn by forms included.
    pub forms_per_page: u64,
    /// Pages beyond this are left out. Whoever reads contained has more patience
    /// ([`contained::Limits`](crate::readers::contained::Limits)), so that what was read is kept.
    pub time: Duration,
}

impl Default for Limits {
    fn default() -> Self {
        Limits {
            pages: 2000,
            calls_per_page: 2_000_000,
            glyphs_per_page: 100_000,
            forms_per_page: 100_000,
            time: Duration::from_secs(40),
        }
    }
}

/// Why nothing came out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Refusal {
    /// Needs a password.
    Locked,
    /// Encrypted in a way the engine doesn't know.
    UnknownCipher,
    /// Not a PDF, or too damaged.
    Damaged,
}

/// Takes down the glyphs of all pages. May panic on damaged files: call it through
/// [`guard`](super::guard).
pub fn glyphs(bytes: Vec<u8>, limits: Limits) -> Result<Glyphs, Refusal> {
    let pdf = Pdf::new(bytes).map_err(|e| match e {
        LoadPdfError::Decryption(DecryptionError::PasswordProtected) => Refusal::Locked,
        LoadPdfError::Decryption(_) => Refusal::UnknownCipher,
        LoadPdfError::Invalid => Refusal::Damaged,
    })?;
    let settings = InterpreterSettings {
        // Notes on the margin and form fields are not what the authors print.
        render_content: RenderContent::PAGE,
        ..InterpreterSettings::default()
    };
    let end = Instant::now() + limits.time;
    let mut taker = Taker::new(limits, end);
    let all = pdf.pages();
    let mut cache = InterpreterCache::new();
    let mut forms = Forms::default();
    taker.out.left_out = all.len().saturating_sub(limits.pages);
    for (index, page) in all.iter().take(limits.pages).enumerate() {
        if Instant::now() > end {
            taker.out.left_out += all.len().min(limits.pages) - index;
            break;
        }
        let unit = unit(page);
        let (width, height) = page.render_dimensions();
        let (width, height) = (width * unit, height * unit);
        taker.start_page(index as u32 + 1, width, height);
        if forms.drawn_on(page) > limits.forms_per_page {
            taker.page.cut_short = true;
            taker.end_page();
            continue;
        }
        taker.draw_type3 = !forms.drawn_by_glyphs();
        let done = catch_unwind(AssertUnwindSafe(|| {
            let mut context = Context::new(
                Affine::scale(f64::from(unit)) * page.initial_transform(true).to_kurbo(),
                Rect::new(0.0, 0.0, width as f64, height as f64),
                &cache,
                page.xref(),
                settings.clone(),
            );
            interpret_page(page, &mut context, &mut taker);
        }));
        if done.is_err() {
            // A page given up half-way may leave the cache in any state.
            cache = InterpreterCache::new();
            taker.page.cut_short = true;
        }
        taker.end_page();
    }
    super::shapes::verify(&mut taker.out);
    taker.out.find_bold_fonts();
    Ok(taker.out)
}

/// How many points a step of the page's own coordinates takes; pages wider than five metres need it.
fn unit(page: &Page<'_>) -> f32 {
    let unit = page.raw().get::<f32>(USER_UNIT).unwrap_or(1.0);
    if unit.is_finite() {
        unit.clamp(0.1, 1000.0)
    } else {
        1.0
    }
}

/// The payload with which a page is given up.
struct Enough;

struct Taker {
    out: Glyphs,
    page: PageGlyphs,
    calls: u64,
    limits: Limits,
    end: Instant,
    fonts: FxHashMap<u128, u16>,
    shapes: FxHashMap<GlyphIdentifier, u32>,
    /// What each shape means when it is selected by this code; asking the engine takes longer.
    meanings: Vec<(u32, Meaning)>,
    type3: Bounds,
    /// Glyphs of Type 3 fonts may be drawn to see what they cover.
    draw_type3: bool,
    /// The open stretches of marked content: the first glyph and the text it stands for, if the file
    /// says so.
    marked: Vec<Option<(usize, String)>>,
    /// How many more are open than are followed.
    unmarked: usize,
}

/// Marked content inside marked content is not followed any deeper.
const DEEPEST_MARKS: usize = 64;

impl Taker {
    fn new(limits: Limits, end: Instant) -> Taker {
        Taker {
            out: Glyphs::default(),
            page: PageGlyphs::default(),
            calls: 0,
            limits,
            end,
            fonts: FxHashMap::default(),
            shapes: FxHashMap::default(),
            meanings: Vec::new(),
            type3: Bounds::default(),
            draw_type3: false,
            marked: Vec::new(),
            unmarked: 0,
        }
    }

    fn start_page(&mut self, number: u32, width: f32, height: f32) {
        self.calls = 0;
        self.marked.clear();
        self.unmarked = 0;
        self.page = PageGlyphs {
            number,
            width,
            height,
            ..PageGlyphs::default()
        };
    }

    fn end_page(&mut self) {
        afterwards::put_right(&mut self.page.glyphs);
        fractions::lay_out(&mut self.page);
        self.out.pages.push(std::mem::take(&mut self.page));
    }

    fn count(&mut self, calls: u64) {
        self.calls += calls;
        let late = self.calls % 4096 < calls && Instant::now() > self.end;
        if self.calls > self.limits.calls_per_page
            || self.page.glyphs.len() > self.limits.glyphs_per_page
            || late
        {
            // Unlike `panic!` this prints nothing.
            resume_unwind(Box::new(Enough));
        }
    }

    fn font(&mut self, key: u128) -> u16 {
        let fonts = &mut self.out.fonts;
        let index = *self.fonts.entry(key).or_insert_with(|| {
            fonts.push(FontUse::default());
            (fonts.len() - 1).min(u16::MAX as usize) as u16
        });
        fonts[index as usize].uses += 1;
        index
    }

    fn meaning(&mut self, glyph: &Drawn<'_>, shape: Option<u32>) -> Meaning {
        let Some(shape) = shape.map(|s| s as usize) else {
            return meaning(glyph);
        };
        if let Some((code, known)) = self.meanings.get(shape)
            && *code == glyph.char_code()
        {
            return known.clone();
        }
        let new = meaning(glyph);
        if shape >= self.meanings.len() {
            self.meanings.resize(shape + 1, (u32::MAX, Meaning::Unknown));
        }
        self.meanings[shape] = (glyph.char_code(), new.clone());
        new
    }

    fn take<'a>(
        &mut self,
        glyph: &Drawn<'a>,
        place: Affine,
        next: Option<Point>,
        paint: &Paint<'a>,
        shown: bool,
    ) {
        let (advance, font, shape) = match glyph {
            Drawn::Outline(g) => {
                let id = g.identifier();
                let font = self.font(font_key(&id));
                let shapes = &mut self.out.shapes;
                let shape = *self.shapes.entry(id).or_insert_with(|| {
                    shapes.push(shape(font, g.char_code(), &g.outline(), g.advance_width()));
                    shapes.len() as u32 - 1
                });
                // The text behind a scanned page is not what the page shows.
                (g.advance_width(), font, shown.then_some(shape))
            }
            Drawn::Type3(g) => (g.advance_width(), self.font(0), None),
        };
        let advance = advance.filter(|a| a.is_finite()).unwrap_or(500.0) as f64;
        let origin = place * Point::new(0.0, 0.0);
        let mut end = place * Point::new(advance, 0.0);
        let along = place * Point::new(1000.0, 0.0) - origin;
        let up = place * Point::new(0.0, 1000.0) - origin;
        let size = up.hypot() as f32;
        // The sizes of bitmap fonts are put right at the end of the page.
        let drawable = shape.is_none() || (0.5..2000.0).contains(&size);
        if !drawable || !origin.is_finite() || !along.is_finite() || along.hypot() == 0.0 {
            return;
        }
        // Fonts that are not embedded are stretched; where the next glyph begins is then the truth.
        let mut stretch = 1.0;
        if let Some(next) = next {
            let (whole, part) = ((end - origin).hypot(), (next - origin).dot(along) / along.hypot());
            if part > 0.3 * whole && part < 0.95 * whole {
                end = origin + along * (part / along.hypot());
                stretch = part / whole;
            }
        }
        let unit = along / along.hypot();
        let turn = match (unit.x, unit.y) {
            (x, _) if x > 0.96 => Turn::None,
            (x, _) if x < -0.96 => Turn::Half,
            (_, y) if y > 0.96 => Turn::Quarter,
            (_, y) if y < -0.96 => Turn::ThreeQuarters,
            // Slanted text is a watermark or an axis label.
            _ => return,
        };
        let (width, height) = (self.page.width, self.page.height);
        let middle = origin.midpoint(end);
        let inside = |v: f64, limit: f32| v > -2.0 && v < limit as f64 + 2.0;
        if !inside(middle.x, width) || !inside(middle.y, height) {
            return;
        }
        let to = |p: Point| turn.to_reading((p.x as f32, p.y as f32), (width, height));
        let (x0, baseline) = to(origin);
        let (x1, _) = to(end);
        let bounds = match glyph {
            Drawn::Outline(_) => shape.map(|s| {
                let [x0, y0, x1, y1] = self.out.shapes[s as usize].bounds.map(f64::from);
                Rect::new(x0, y0, x1, y1)
            }),
            Drawn::Type3(g) => self.draw_type3.then(|| self.type3.of(g, paint)).flatten(),
        };
        let bounds = bounds.filter(|b| is_usual(*b));
        let ink = bounds.map(|bounds| {
            let bounds = (place * Affine::scale_non_uniform(stretch, 1.0)).transform_rect_bbox(bounds);
            span(
                to(Point::new(bounds.x0, bounds.y0)),
                to(Point::new(bounds.x1, bounds.y1)),
            )
        });
        let meaning = self.meaning(glyph, shape);
        let mut glyph = Glyph {
            meaning,
            layer: None,
            code: glyph.char_code(),
            font,
            shape,
            size,
            x0: x0.min(x1),
            x1: x0.max(x1),
            baseline,
            ink: Area::default(),
            turn,
        };
        if glyph.meaning == Meaning::Char('\u{ad}') && glyph.x1 - glyph.x0 < 0.05 * size {
            // Where a word may be broken and is not.
            return;
        }
        glyph.ink = ink.unwrap_or_else(|| glyph.area());
        self.page.glyphs.push(glyph);
    }
}

/// Whether something is drawn, and no larger than glyphs are.
fn is_usual(bounds: Rect) -> bool {
    let near = |v: f64| v.abs() <= 3000.0;
    bounds.width() > 0.0
        && bounds.height() > 0.0
        && [bounds.x0, bounds.y0, bounds.x1, bounds.y1].into_iter().all(near)
}

/// What the text layer says. Bitmap fonts and Type 1 fonts with home-made glyph names often say
/// nothing, but then use the ASCII code.
fn meaning(glyph: &Drawn<'_>) -> Meaning {
    let bitmap = matches!(glyph, Drawn::Type3(_));
    match glyph.as_unicode() {
        Some(BfString::Char(c)) if c != '\0' && !(c.is_control() && bitmap) => Meaning::Char(c),
        Some(BfString::String(s)) if !s.is_empty() => Meaning::Many(s.into()),
        _ => {
            let coded_in_ascii = match glyph {
                Drawn::Type3(_) => true,
                Drawn::Outline(g) => g.font_data().is_none(),
            };
            match char::from_u32(glyph.char_code()) {
                Some(c @ ' '..='~') if coded_in_ascii => Meaning::Char(c),
                _ => Meaning::Unknown,
            }
        }
    }
}

/// The engine tells fonts apart inside a glyph's identifier only; its hash begins with the font.
fn font_key(id: &GlyphIdentifier) -> u128 {
    #[derive(Default)]
    struct First(Option<u128>);
    impl Hasher for First {
        fn finish(&self) -> u64 {
            0
        }
        fn write(&mut self, _: &[u8]) {}
        fn write_u128(&mut self, value: u128) {
            self.0.get_or_insert(value);
        }
    }
    let mut first = First::default();
    id.hash(&mut first);
    first.0.unwrap_or(1)
}

fn shape(font: u16, code: u32, path: &BezPath, advance: Option<f32>) -> Shape {
    let p = |p: Point| [p.x as f32, p.y as f32];
    let outline = path
        .elements()
        .iter()
        .map(|e| match *e {
            PathEl::MoveTo(a) => Step::Move(p(a)),
            PathEl::LineTo(a) => Step::Line(p(a)),
            PathEl::QuadTo(a, b) => Step::Quad(p(a), p(b)),
            PathEl::CurveTo(a, b, c) => Step::Curve(p(a), p(b), p(c)),
            PathEl::ClosePath => Step::Close,
        })
        .collect();
    let bounds = path.bounding_box();
    Shape {
        font,
        code,
        outline,
        ink: path.area().abs() as f32,
        bounds: [
            bounds.x0 as f32,
            bounds.y0 as f32,
            bounds.x1 as f32,
            bounds.y1 as f32,
        ],
        advance: advance.unwrap_or(bounds.x1 as f32),
    }
}

impl<'a> Device<'a> for Taker {
    fn draw_glyph_run(&mut self, run: &GlyphRun<'_, 'a>, props: DrawProps<'a>, mode: &DrawMode) {
        let glyphs = run.glyphs();
        self.count(1 + glyphs.len() as u64);
        for (i, glyph) in glyphs.iter().enumerate() {
            let place = props.transform * glyph.transform();
            let next = glyphs
                .get(i + 1)
                .map(|n| props.transform * n.transform() * Point::ORIGIN);
            let shown = !matches!(mode, DrawMode::Invisible);
            self.take(glyph, place, next, &props.paint, shown);
        }
    }

    fn draw_image(&mut self, image: Image<'a, '_>, props: ImageDrawProps<'a>) {
        self.count(1);
        let area = Rect::new(0.0, 0.0, f64::from(image.width()), f64::from(image.height()));
        engine_paths::take_image(&mut self.page.rules, props.transform.transform_rect_bbox(area));
        self.page.image = true;
    }

    fn draw_path(&mut self, path: &BezPath, props: DrawProps<'a>, mode: &DrawMode) {
        self.count(1);
        engine_paths::take(&mut self.page.rules, path, &props, mode);
    }

    fn push_clip_path(&mut self, _: &ClipPath) {
        self.count(1);
    }

    fn push_transparency_group(&mut self, _: f32, _: Option<SoftMask<'a>>, _: BlendMode) {
        self.count(1);
    }

    fn pop_clip(&mut self) {}

    fn pop_transparency_group(&mut self) {}

    fn begin_marked_content(&mut self, _: &[u8], properties: Option<&Dict<'_>>) {
        self.count(1);
        let actual = properties
            .and_then(|p| p.get::<hayro_syntax::object::String<'_>>(ACTUAL_TEXT))
            .map(|s| replaced::text(s.as_bytes()));
        if self.marked.len() < DEEPEST_MARKS {
            self.marked
                .push(actual.map(|text| (self.page.glyphs.len(), text)));
        } else {
            self.unmarked += 1;
        }
    }

    fn end_marked_content(&mut self) {
        if self.unmarked > 0 {
            self.unmarked -= 1;
        } else if let Some(Some((from, text))) = self.marked.pop() {
            replaced::replace(&mut self.page.glyphs, from, &text);
        }
    }
}
