//! Contrast of colours as WCAG 2.2 defines it, and the nearest shade of a company's colour that can be read.

use crate::quantity::math;

/// WCAG 2.2, success criterion 1.4.3: the least contrast of text with what is behind it.
pub(super) const TEXT: f64 = 4.5;

/// Relative luminance of an sRGB colour, 0 to 1 (WCAG 2.2, "relative luminance").
fn luminance(colour: [u8; 3]) -> f64 {
    let [r, g, b] = colour.map(|c| {
        let c = f64::from(c) / 255.0;
        if c <= 0.04045 { c / 12.92 } else { math::pow((c + 0.055) / 1.055, 2.4) }
    });
    0.2126 * r + 0.7152 * g + 0.0722 * b
}

/// Contrast ratio, 1 to 21 (WCAG 2.2, "contrast ratio").
pub(super) fn ratio(a: [u8; 3], b: [u8; 3]) -> f64 {
    let (a, b) = (luminance(a), luminance(b));
    (a.max(b) + 0.05) / (a.min(b) + 0.05)
}

/// The colour itself where it has at least `least` contrast with `behind`; otherwise mixed towards black or white, whichever
/// `behind` is further from, just as far as it takes.
pub(super) fn readable(colour: [u8; 3], behind: [u8; 3], least: f64) -> [u8; 3] {
    let end = if ratio(behind, [0; 3]) > ratio(behind, [255; 3]) { 0 } else { 255 };
    (0..=64u16).map(|step| mix(colour, [end; 3], step)).find(|&c| ratio(c, behind) >= least).unwrap_or([end; 3])
}

/// `step` sixty-fourths of the way from one colour to another.
fn mix(from: [u8; 3], to: [u8; 3], step: u16) -> [u8; 3] {
    let channel = |i: usize| u8::try_from((u16::from(from[i]) * (64 - step) + u16::from(to[i]) * step) / 64).unwrap_or(u8::MAX);
    [channel(0), channel(1), channel(2)]
}

/// `#rrggbb`.
pub(super) fn hex([r, g, b]: [u8; 3]) -> String {
    format!("#{r:02x}{g:02x}{b:02x}")
}

#[cfg(test)]
mod tests {
    use super::*;

    // Black on white 21:1 and #767676 on white 4.54:1, as WCAG's techniques G17 and G18 give them.
    #[test]
    fn ratios_are_the_published_ones() {
        assert!((ratio([0; 3], [255; 3]) - 21.0).abs() < 1e-9);
        assert!((ratio([0x76; 3], [255; 3]) - 4.54).abs() < 0.005);
        assert!(ratio([0x77; 3], [255; 3]) < TEXT);
    }

    #[test]
    fn every_colour_becomes_readable() {
        for behind in [[255; 3], [0x14, 0x18, 0x1d], [0x80; 3]] {
            for n in 0..512u32 {
                let colour = [n & 7, n >> 3 & 7, n >> 6].map(|c| u8::try_from(c * 36).unwrap_or(255));
                assert!(ratio(readable(colour, behind, TEXT), behind) >= TEXT, "{colour:?} on {behind:?}");
            }
        }
    }

    #[test]
    fn a_readable_colour_stays() {
        assert_eq!(readable([0x1f, 0x5c, 0x57], [255; 3], TEXT), [0x1f, 0x5c, 0x57]);
    }
}
