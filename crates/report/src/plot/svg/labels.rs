//! Where a label has room: inside its panel, on no other label, and off the curves where it can be.

use super::{Field, LEFT, RIGHT, Sheet};

/// A rectangle that a label or a mark has taken: left, top, right, bottom, in pixels.
pub(super) type Box2 = (f64, f64, f64, f64);

/// The first of the spots (left end and base line of the text) that is free and off the curves, else the
/// first that is free; it is taken.
pub(super) fn place(
    sheet: &Sheet<'_, '_>,
    field: &Field<'_>,
    width: f64,
    spots: &[(f64, f64)],
    taken: &mut Vec<Box2>,
) -> Option<(f64, f64)> {
    let room = |(left, base): (f64, f64)| (left - 1.0, base - 10.0, left + width + 1.0, base + 3.0);
    let inside =
        |b: Box2| b.0 > LEFT + 1.0 && b.2 < RIGHT - 1.0 && b.1 > field.top && b.3 < field.bottom();
    let free = |spot: &&(f64, f64)| {
        let b = room(**spot);
        inside(b) && !taken.iter().any(|t| touches(*t, b))
    };
    let clear = |spot: &&(f64, f64)| free(spot) && !crosses(sheet, field, room(**spot));
    let found = spots
        .iter()
        .find(clear)
        .or_else(|| spots.iter().find(free))
        .copied()?;
    taken.push(room(found));
    Some(found)
}

/// Whether two rectangles overlap.
fn touches(a: Box2, b: Box2) -> bool {
    a.0 < b.2 && b.0 < a.2 && a.1 < b.3 && b.1 < a.3
}

/// Whether a curve of the panel passes through a rectangle; its points are closer than two pixels.
fn crosses(sheet: &Sheet<'_, '_>, field: &Field<'_>, b: Box2) -> bool {
    field.traces.iter().any(|trace| {
        let start = trace.partition_point(|p| sheet.x(p.0) < b.0);
        let inside = trace.iter().skip(start.saturating_sub(1));
        let mut last: Option<f64> = None;
        for (time, value) in inside {
            let y = field.y(*value);
            let (low, high) = (last.unwrap_or(y).min(y), last.unwrap_or(y).max(y));
            if low < b.3 && high > b.1 {
                return true;
            }
            if sheet.x(*time) > b.2 {
                return false;
            }
            last = Some(y);
        }
        false
    })
}
