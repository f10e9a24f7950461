//! Labels that keep clear of each other.

use eframe::egui::{Pos2, Rect, Vec2, pos2};

/// How far a label stands from the mark it belongs to.
const AWAY: f32 = 6.0;

/// A label stands at most so many rows off its mark.
const ROWS_OFF: usize = 3;

/// A mark that wants a label.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Wish {
    pub(crate) mark: Pos2,
    /// How large the label is, and how large a short one.
    pub(crate) sizes: [Vec2; 2],
}

/// Where a label goes, and whether it is the short one.
pub(crate) type Placed = Option<(Rect, bool)>;

/// Finds a place for each label, the first served first: beside its mark, inside `area`, clear of the labels placed
/// before it, of marks and of `taken`. Where the full label has no such place the short one may; `None` where neither
/// has.
///
/// The very first always has a place, if there is any room: below its mark, over the curve, or where it covers fewest
/// of the others.
pub(crate) fn place(area: Rect, wishes: &[Wish], taken: &[Rect]) -> Vec<Placed> {
    let mut busy: Vec<Rect> = taken.to_vec();
    let spots: Vec<Rect> = wishes.iter().map(|w| Rect::from_center_size(w.mark, Vec2::splat(7.0))).collect();
    let mut placed = vec![None; wishes.len()];
    for short in [false, true] {
        for (i, wish) in wishes.iter().enumerate() {
            let Some(found) = placed.get_mut(i).filter(|p: &&mut Placed| p.is_none()) else { continue };
            let size = wish.sizes[usize::from(short)];
            let mut places = candidates(wish.mark, size);
            let first = i == 0 && !short;
            if first {
                places.extend(below(wish.mark, size));
            }
            let free = |r: &Rect| area.contains_rect(*r) && !busy.iter().any(|b| b.intersects(r.expand(1.0)));
            let covered = |r: &Rect| spots.iter().filter(|s| s.intersects(*r)).count();
            let counted = places.into_iter().filter(free).map(|r| (r, covered(&r)));
            let best = counted.filter(|c| first || c.1 == 0).min_by_key(|c| c.1).map(|c| c.0);
            busy.extend(best);
            *found = best.map(|rect| (rect, short));
        }
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
    let above = (1..=ROWS_OFF).flat_map(|row| about(mark, mark.y - AWAY - h - row as f32 * (h + 2.0), w));
    beside.into_iter().chain(above).map(|min| Rect::from_min_size(min, size)).collect()
}

/// Places below a mark, where only curves are.
fn below(mark: Pos2, size: Vec2) -> Vec<Rect> {
    let (w, h) = (size.x, size.y);
    let places = (0..=ROWS_OFF).flat_map(|row| about(mark, mark.y + AWAY + 4.0 + row as f32 * (h + 2.0), w));
    places.map(|min| Rect::from_min_size(min, size)).collect()
}

fn about(mark: Pos2, y: f32, w: f32) -> [Pos2; 3] {
    [mark.x - w / 2.0, mark.x - 4.0, mark.x + 4.0 - w].map(|x| pos2(x, y))
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::vec2;

    fn wish(x: f32, y: f32) -> Wish {
        Wish { mark: pos2(x, y), sizes: [vec2(90.0, 12.0), vec2(30.0, 12.0)] }
    }

    #[test]
    fn labels_never_overlap_and_stay_inside_and_clear_of_marks() {
        let area = Rect::from_min_max(pos2(0.0, 0.0), pos2(300.0, 120.0));
        let wishes: Vec<_> = (0..20).map(|i| wish((i * 37 % 300) as f32, (i * 23 % 120) as f32)).collect();
        let placed: Vec<_> = place(area, &wishes, &[]).into_iter().flatten().collect();
        assert!(placed.iter().any(|p| p.1) && placed.iter().any(|p| !p.1), "{placed:?}");
        for (i, (a, _)) in placed.iter().enumerate() {
            assert!(area.contains_rect(*a));
            assert!(placed.iter().skip(i + 1).all(|(b, _)| !a.intersects(*b)));
            assert!(i == 0 || wishes.iter().all(|w| !a.contains(w.mark)));
        }
    }

    #[test]
    fn the_first_is_served_first() {
        let area = Rect::from_min_max(pos2(0.0, 0.0), pos2(110.0, 14.0));
        let wishes = [wish(5.0, 7.0), wish(8.0, 7.0)];
        assert!(place(area, &wishes[..1], &[])[0].is_some_and(|p| !p.1));
        let both = place(area, &wishes, &[]);
        assert!(both[0].is_some() && both[1].is_none());
    }
}
