//! What the engine draws besides glyphs, taken down as [`Rules`]: lines and bars by their place,
//! everything else only as the area that it takes.

use super::tables::Rules;
use hayro_interpret::kurbo::{Affine, BezPath, PathEl, Point, Rect, Shape as _};
use hayro_interpret::{DrawMode, DrawProps, Paint};

/// Paths with more steps than this are drawings.
const MOST_STEPS: usize = 4000;
/// Images thinner than this many points are rules.
const THIN_IMAGE: f64 = 2.0;

/// Takes down a path as it is painted.
pub fn take(rules: &mut Rules, path: &BezPath, props: &DrawProps<'_>, mode: &DrawMode) {
    if !rules.takes_more() || !is_seen(&props.paint) {
        return;
    }
    let elements = path.elements();
    if elements.len() > MOST_STEPS {
        rules.drawing(area(props.transform.transform_rect_bbox(path.bounding_box())));
        return;
    }
    match mode {
        DrawMode::Fill(_) => fill(rules, elements, props.transform),
        DrawMode::Stroke(pen) => stroke(rules, elements, props.transform, pen.line_width),
        DrawMode::FillAndStroke(_, pen) => {
            fill(rules, elements, props.transform);
            stroke(rules, elements, props.transform, pen.line_width);
        }
        DrawMode::Invisible => {}
    }
}

/// Takes down an image, if it is as thin as a rule: old TeX files draw rules so.
pub fn take_image(rules: &mut Rules, place: Rect) {
    let thin = place.width().min(place.height()) < THIN_IMAGE;
    if thin && place.is_finite() && rules.takes_more() {
        rules.bar(area(place));
    }
}

/// White on white rules nothing.
fn is_seen(paint: &Paint<'_>) -> bool {
    match paint {
        Paint::Color(color) => {
            let [r, g, b, a] = color.to_rgba().components();
            a > 0.03 && r.min(g).min(b) < 0.985
        }
        Paint::Pattern(_) => true,
    }
}

fn area(r: Rect) -> [f32; 4] {
    [r.x0 as f32, r.y0 as f32, r.x1 as f32, r.y1 as f32]
}

fn stroke(rules: &mut Rules, elements: &[PathEl], transform: Affine, width: f32) {
    let scale = transform.determinant().abs().sqrt() as f32;
    let at = |p: Point| {
        let p = transform * p;
        [p.x as f32, p.y as f32]
    };
    let (mut start, mut last) = ([0.0; 2], [0.0; 2]);
    for element in elements {
        let next = match *element {
            PathEl::MoveTo(p) => {
                start = at(p);
                last = start;
                continue;
            }
            PathEl::LineTo(p) => at(p),
            PathEl::ClosePath => start,
            PathEl::QuadTo(_, p) | PathEl::CurveTo(_, _, p) => {
                let next = at(p);
                rules.drawing([
                    last[0].min(next[0]),
                    last[1].min(next[1]),
                    last[0].max(next[0]),
                    last[1].max(next[1]),
                ]);
                last = next;
                continue;
            }
        };
        if !rules.takes_more() {
            return;
        }
        rules.stroke(last, next, width * scale);
        last = next;
    }
}

/// Each closed outline of a filled path by itself: a whole grid may be one path.
fn fill(rules: &mut Rules, elements: &[PathEl], transform: Affine) {
    let mut hull: Option<Rect> = None;
    let (mut straight, mut corners) = (true, 0);
    let done = |hull: Option<Rect>, straight: bool, corners: usize, rules: &mut Rules| {
        let Some(r) = hull else { return };
        let a = area(r);
        let thin = (a[2] - a[0]).min(a[3] - a[1]) <= 3.0;
        if straight && (corners <= 6 || thin) {
            rules.bar(a);
        } else {
            rules.drawing(a);
        }
    };
    let mut last = Point::ORIGIN;
    for element in elements {
        let point = match *element {
            PathEl::MoveTo(p) => {
                done(hull.take(), straight, corners, rules);
                (straight, corners) = (true, 0);
                p
            }
            PathEl::LineTo(p) => p,
            PathEl::QuadTo(_, p) | PathEl::CurveTo(_, _, p) => {
                straight = false;
                p
            }
            PathEl::ClosePath => continue,
        };
        if !rules.takes_more() {
            return;
        }
        let p = transform * point;
        // A slanted side that is long makes it a drawing; the mitred ends of borders are short.
        if corners > 0 && (p.x - last.x).abs() > 4.0 && (p.y - last.y).abs() > 4.0 {
            straight = false;
        }
        last = p;
        corners += 1;
        hull = Some(hull.map_or(Rect::from_points(p, p), |r| r.union_pt(p)));
    }
    done(hull, straight, corners, rules);
}
