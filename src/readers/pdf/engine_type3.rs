//! Glyphs that a file draws by instructions instead of outlines (Type 3 fonts): bitmaps of old
//! TeX files, outlines of plots and of browsers. What they cover is found out by drawing them once.

use hayro_interpret::font::{Glyph, GlyphRun, Type3Glyph};
use hayro_interpret::kurbo::{Affine, BezPath, Rect, Shape as _};
use hayro_interpret::{
    BlendMode, CacheKey as _, ClipPath, Device, DrawMode, DrawProps, Image, ImageDrawProps, Paint, SoftMask,
};
use std::collections::HashMap;
use std::panic::{AssertUnwindSafe, catch_unwind, resume_unwind};

/// Drawing instructions looked at for one glyph.
const MOST_CALLS: u32 = 2000;

/// The glyphs seen so far.
#[derive(Default)]
pub struct Bounds(HashMap<u128, Option<Rect>>);

impl Bounds {
    /// What a glyph covers, in thousandths of the font size, y upwards.
    pub fn of<'a>(&mut self, glyph: &Type3Glyph<'a>, paint: &Paint<'a>) -> Option<Rect> {
        *self
            .0
            .entry(glyph.cache_key())
            .or_insert_with(|| drawn(glyph, paint))
    }
}

fn drawn<'a>(glyph: &Type3Glyph<'a>, paint: &Paint<'a>) -> Option<Rect> {
    let mut canvas = Canvas::default();
    // Given up half-way, the canvas still holds what was drawn until then.
    let _ = catch_unwind(AssertUnwindSafe(|| {
        glyph.interpret(&mut canvas, Affine::IDENTITY, Affine::IDENTITY, paint);
    }));
    canvas.area
}

/// Remembers only the area that was drawn on.
#[derive(Default)]
struct Canvas {
    area: Option<Rect>,
    calls: u32,
}

impl Canvas {
    fn draw(&mut self, area: Rect) {
        self.calls += 1;
        if self.calls > MOST_CALLS {
            // The engine has no other way to be stopped; unlike `panic!` this prints nothing.
            resume_unwind(Box::new(()));
        }
        if area.is_finite() {
            self.area = Some(self.area.map_or(area, |a| a.union(area)));
        }
    }
}

impl<'a> Device<'a> for Canvas {
    fn draw_path(&mut self, path: &BezPath, props: DrawProps<'a>, mode: &DrawMode) {
        let pen = match mode {
            DrawMode::Stroke(pen) | DrawMode::FillAndStroke(_, pen) => f64::from(pen.line_width) / 2.0,
            DrawMode::Fill(_) => 0.0,
            DrawMode::Invisible => return,
        };
        let area = path.bounding_box().inflate(pen, pen);
        self.draw(props.transform.transform_rect_bbox(area));
    }

    fn draw_glyph_run(&mut self, run: &GlyphRun<'_, 'a>, props: DrawProps<'a>, _: &DrawMode) {
        for glyph in run.glyphs() {
            if let Glyph::Outline(outline) = &**glyph {
                let place = props.transform * glyph.transform();
                self.draw(place.transform_rect_bbox(outline.outline().bounding_box()));
            }
        }
    }

    fn draw_image(&mut self, image: Image<'a, '_>, props: ImageDrawProps<'a>) {
        let area = Rect::new(0.0, 0.0, f64::from(image.width()), f64::from(image.height()));
        self.draw(props.transform.transform_rect_bbox(area));
    }

    fn push_clip_path(&mut self, _: &ClipPath) {}

    fn push_transparency_group(&mut self, _: f32, _: Option<SoftMask<'a>>, _: BlendMode) {}

    fn pop_clip(&mut self) {}

    fn pop_transparency_group(&mut self) {}
}
