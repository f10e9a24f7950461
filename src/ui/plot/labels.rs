//! Labels that keep clear of each other.

use eframe::egui::{Pos2, Rect, Vec2, pos2};

/// How far a label stands from the mark it belongs to.
const AWAY: f32 = 6.0;

/// A label stands at most so many rows above its mark.
const ROWS_OFF: usize = 3;

/// Finds a place for each label, the first served first: beside its mark, inside `area`, clear of the labels placed
/// before it, of marks and of `taken`. `None` where there is no such place.
pub(crate) fn place(area: Rect, marks: &[(Pos2, Vec2)], taken: &[Rect]) -> Vec<Option<Rect>> {
    let mut busy: Vec<Rect> = taken.to_vec();
    let spots: Vec<Rect> = marks.iter().map(|m| Rect::from_center_size(m.0, Vec2::splat(7.0))).collect();
    let mut placed = Vec::with_capacity(marks.len());
    for (i, &(mark, size)) in marks.iter().enumerate() {
        let free = |rect: &Rect| {
            area.contains_rect(*rect)
                && !busy.iter().any(|b| b.intersects(rect.expand(1.0)))
                && !spots.iter().take(i).any(|s| s.intersects(*rect))
        };
        let clear = |rect: &Rect| free(rect) && !spots.iter().skip(i + 1).any(|s| s.intersects(*rect));
        let found = candidates(mark, size).into_iter().find(clear);
        // In a crowd a label may stand on marks that come after its own.
        let found = found.or_else(|| candidates(mark, size).into_iter().find(free));
        busy.extend(found);
        placed.push(found);
    }
    placed
}

/// Places beside a mark, best first; the last ones stand off above it.
fn candidates(mark: Pos2, size: Vec2) -> Vec<Rect> {
    let (w, h) = (size.x, size.y);
    let beside = [
        pos2(mark.x + AWAY, mark.y - h / 2.0),
        pos2(mark.x - AWAY - w, mark.y - h / 2.0),
        pos2(mark.x + AWAY - 2.0, mark.y - h - 3.0),
        pos2(mark.x - AWAY + 2.0 - w, mark.y - h - 3.0),
        pos2(mark.x - w / 2.0, mark.y - h - AWAY),
        pos2(mark.x + AWAY, mark.y + 3.0),
    ];
    let off = (1..=ROWS_OFF).flat_map(|row| {
        let y = mark.y - AWAY - h - row as f32 * (h + 2.0);
        [mark.x - w / 2.0, mark.x - 4.0, mark.x + 4.0 - w].map(|x| pos2(x, y))
    });
    beside.into_iter().chain(off).map(|min| Rect::from_min_size(min, size)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::vec2;

    #[test]
    fn labels_never_overlap_and_stay_inside() {
        let area = Rect::from_min_max(pos2(0.0, 0.0), pos2(300.0, 120.0));
        let marks: Vec<_> =
            (0..60).map(|i| (pos2((i * 37 % 300) as f32, (i * 23 % 120) as f32), vec2(90.0, 12.0))).collect();
        let placed: Vec<Rect> = place(area, &marks, &[]).into_iter().flatten().collect();
        assert!(placed.len() >= 2 && placed.len() < marks.len(), "{}", placed.len());
        for (i, a) in placed.iter().enumerate() {
            assert!(area.contains_rect(*a));
            assert!(placed.iter().skip(i + 1).all(|b| !a.intersects(*b)));
        }
    }

    #[test]
    fn the_first_is_served_first() {
        let area = Rect::from_min_max(pos2(0.0, 0.0), pos2(110.0, 14.0));
        let marks = [(pos2(5.0, 7.0), vec2(90.0, 12.0)), (pos2(8.0, 7.0), vec2(90.0, 12.0))];
        let placed = place(area, &marks[..1], &[]);
        assert!(placed[0].is_some());
        assert!(place(area, &marks, &[])[1].is_none());
    }
}
