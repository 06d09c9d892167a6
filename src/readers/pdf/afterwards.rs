//! What can be told of glyphs only when the page is complete, because it depends on the others:
//! what bitmap fonts don't say themselves.

use super::glyphs::{Glyph, Meaning};
use std::collections::HashMap;

/// Puts sizes and meanings right.
pub fn put_right(glyphs: &mut [Glyph]) {
    for g in glyphs.iter_mut() {
        // Whoever draws a soft hyphen shows a hyphen; some files name all their hyphens so.
        if g.meaning == Meaning::Char('\u{ad}') {
            g.meaning = Meaning::Char('-');
        }
    }
    if glyphs.iter().any(|g| g.shape.is_none()) {
        true_sizes(glyphs);
        ligatures(glyphs);
    }
}

/// Bitmap fonts may count in any unit, so that their size says nothing. Where it does not go with
/// the widths, the letters' average width tells: about half the size, as in most fonts.
fn true_sizes(glyphs: &mut [Glyph]) {
    let mut by_size: HashMap<u32, Vec<f32>> = HashMap::new();
    for g in glyphs.iter().filter(|g| g.shape.is_none()) {
        let widths = by_size.entry(g.size.to_bits()).or_default();
        if matches!(g.meaning, Meaning::Char(c) if c.is_alphanumeric()) {
            widths.push(g.x1 - g.x0);
        }
    }
    let mut sizes: HashMap<u32, f32> = HashMap::new();
    for (bits, mut widths) in by_size {
        let size = f32::from_bits(bits);
        widths.sort_by(f32::total_cmp);
        let typical = widths.get(widths.len() / 2).copied().unwrap_or(0.5 * size);
        if !(0.2..1.2).contains(&(typical / size)) {
            sizes.insert(bits, 2.0 * typical);
        }
    }
    for g in glyphs.iter_mut().filter(|g| g.shape.is_none()) {
        if let Some(size) = sizes.get(&g.size.to_bits()) {
            // Where the ink is not known, the size stands for it.
            let stands_in = g.ink == g.area();
            g.size = size.clamp(0.5, 2000.0);
            if stands_in {
                g.ink = g.area();
            }
        }
    }
}

/// TeX's bitmap fonts name nothing; their ligatures have these codes in its two usual encodings. As
/// other files use the same codes for anything, the next character must go on with the word.
fn ligatures(glyphs: &mut [Glyph]) {
    for i in 0..glyphs.len().saturating_sub(1) {
        let (g, next) = (&glyphs[i], &glyphs[i + 1]);
        let text = match g.code {
            0x0b | 0x1b => "ff",
            0x0c | 0x1c => "fi",
            0x0d | 0x1d => "fl",
            0x0e | 0x1e => "ffi",
            0x0f | 0x1f => "ffl",
            _ => continue,
        };
        let touches = |a: &Glyph, b: &Glyph| {
            a.baseline == b.baseline && a.turn == b.turn && (b.x0 - a.x1).abs() < 0.1 * a.size
        };
        let goes_on = touches(g, next) && matches!(next.meaning, Meaning::Char('a'..='z'));
        let begins = i.checked_sub(1).map(|b| &glyphs[b]).is_none_or(|before| {
            !touches(before, g)
                || matches!(before.meaning, Meaning::Char(c) if !c.is_ascii_digit())
                || matches!(before.meaning, Meaning::Many(_))
        });
        if g.shape.is_none() && g.meaning == Meaning::Unknown && goes_on && begins {
            glyphs[i].meaning = Meaning::Many(text.into());
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::glyphs::Turn;
    use super::*;

    /// Bitmap glyphs side by side, half as wide as `size`.
    fn row(codes: &[(u32, Meaning)], width: f32, size: f32) -> Vec<Glyph> {
        codes
            .iter()
            .enumerate()
            .map(|(i, (code, meaning))| Glyph {
                meaning: meaning.clone(),
                layer: None,
                code: *code,
                font: 0,
                shape: None,
                size,
                x0: i as f32 * width,
                x1: (i + 1) as f32 * width,
                baseline: 100.0,
                ink: [i as f32 * width, 95.0, (i + 1) as f32 * width, 100.0],
                turn: Turn::None,
            })
            .collect()
    }

    fn letter(c: char) -> (u32, Meaning) {
        (c as u32, Meaning::Char(c))
    }

    #[test]
    fn bitmap_fonts_that_count_in_their_own_unit_get_the_size_that_is_seen() {
        let mut glyphs = row(&[letter('t'), letter('e'), letter('a')], 5.0, 0.12);
        put_right(&mut glyphs);
        assert!(glyphs.iter().all(|g| g.size == 10.0));
        let mut glyphs = row(&[letter('t'), letter('e'), letter('a')], 5.0, 11.0);
        put_right(&mut glyphs);
        assert!(glyphs.iter().all(|g| g.size == 11.0), "usual sizes stay");
    }

    #[test]
    fn ligatures_are_read_inside_words_only() {
        let unknown = (0x0c, Meaning::Unknown);
        let mut glyphs = row(&[letter('e'), unknown.clone(), letter('c')], 5.0, 10.0);
        put_right(&mut glyphs);
        assert_eq!(glyphs[1].meaning, Meaning::Many("fi".into()));
        // As likely a digit or a sign: `.?5`, `x?`.
        for others in [
            [letter('.'), letter('5')],
            [letter('x'), letter('=')],
            [letter('1'), letter('a')],
        ] {
            let mut glyphs = row(
                &[others[0].clone(), unknown.clone(), others[1].clone()],
                5.0,
                10.0,
            );
            put_right(&mut glyphs);
            assert_eq!(glyphs[1].meaning, Meaning::Unknown, "{others:?}");
        }
    }

    #[test]
    fn drawn_soft_hyphens_are_hyphens() {
        let mut glyphs = row(&[letter('3'), letter('\u{ad}'), letter('w')], 5.0, 10.0);
        put_right(&mut glyphs);
        assert_eq!(glyphs[1].meaning, Meaning::Char('-'));
    }
}
