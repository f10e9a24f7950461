//! The marks of tones in a pane and their labels.

use eframe::egui::{self, Align2, Color32, Painter, Rect, Stroke, pos2, vec2};

use super::desk::Desk;
use super::pane::{Plot, is_picked};
use super::plot::{Wish, place};
use super::{figure, theme, widget};
use crate::reading::{PaneReading, Reading, ReadingState, Tone, Verdict};

/// How high over a residue's foot marks stand.
const FOOT: f32 = 8.0;

impl Plot<'_> {
    /// Marks of tones, the strongest labelled first; what has no room is left out.
    pub(super) fn draw_marks(&self, painter: &Painter, reading: &Reading, desk: &Desk, taken: &[Rect]) {
        let stale = !desk.latest.is_current();
        let ink = if stale { self.palette.quiet.gamma_multiply(0.6) } else { self.palette.ink };
        let mut marks: Vec<(&Tone, &PaneReading, egui::Pos2)> =
            reading.tones.iter().filter_map(|t| self.mark(t).map(|(r, at)| (t, r, at))).collect();
        for (tone, reading, at) in &marks {
            if self.is_picked(tone, desk) {
                painter.circle_stroke(*at, 7.0, Stroke::new(1.5, self.palette.accent));
            }
            self.put_mark(painter, *at, tone, reading, ink);
        }
        let labelled = |tone: &Tone, r: &PaneReading| {
            (r.state == ReadingState::Clear && !self.pane.residue) || self.is_picked(tone, desk)
        };
        let bare = marks.iter().filter(|(tone, r, _)| !labelled(tone, r));
        let taken: Vec<Rect> =
            bare.map(|m| Rect::from_center_size(m.2, vec2(7.0, 7.0))).chain(taken.iter().copied()).collect();
        marks.retain(|(tone, r, _)| labelled(tone, r));
        marks.sort_by(|a, b| {
            let first = |m: &(&Tone, _, _)| self.is_picked(m.0, desk);
            first(b).cmp(&first(a)).then(b.1.level_db.total_cmp(&a.1.level_db))
        });
        marks.truncate(40);
        let texts: Vec<[String; 2]> = marks
            .iter()
            .map(|(tone, r, _)| {
                let [full, brief] = labels(tone, r);
                // A residue has nothing of the level left.
                [if self.pane.residue { brief.clone() } else { full }, brief]
            })
            .collect();
        let size = |text: &String| widget::text_size(painter, text, theme::quiet());
        let wish =
            |(m, text): (&(_, _, egui::Pos2), &[String; 2])| Wish { mark: m.2, sizes: text.each_ref().map(size) };
        let wishes: Vec<Wish> = marks.iter().zip(&texts).map(wish).collect();
        for ((found, [full, brief]), (tone, _, _)) in
            place(self.area, &wishes, &taken).into_iter().zip(&texts).zip(&marks)
        {
            let Some((rect, short)) = found else { continue };
            let text = if short { brief } else { full };
            let ground = rect.expand2(vec2(3.0, 0.0));
            let mark = self.mark(tone).map_or(rect.center(), |m| m.1);
            // A label that stands off is tied to its mark.
            let foot = pos2(mark.x.clamp(rect.left(), rect.right()), mark.y.clamp(rect.top(), rect.bottom()));
            if mark.distance(foot) > 8.0 {
                painter.line_segment([foot, mark], Stroke::new(1.0, self.palette.quiet));
            }
            // A curve under a label stays to be seen.
            painter.rect_filled(ground, 2.0, self.palette.card.gamma_multiply(0.72));
            // In a crowd a label may stand on other tones' marks: these still show, behind the letters.
            let mut behind = painter.with_clip_rect(ground);
            behind.multiply_opacity(0.3);
            for other in &reading.tones {
                if let Some((reading, at)) = self.mark(other).filter(|m| ground.contains(m.1)) {
                    self.put_mark(&behind, at, other, reading, ink);
                }
            }
            let colour = if self.is_picked(tone, desk) { self.palette.accent } else { ink };
            widget::write(painter, rect.min, Align2::LEFT_TOP, text, theme::quiet(), colour);
        }
    }

    /// The mark of a tone's verdict, in its hue where this pane reads the tone clear, else in quiet ink; that of the
    /// reading's state where there is no verdict.
    fn put_mark(&self, painter: &Painter, at: egui::Pos2, tone: &Tone, reading: &PaneReading, ink: Color32) {
        let Some(verdict) = verdict_shown(tone) else {
            widget::state_mark(painter, at, reading.state, ink);
            return;
        };
        let clear = reading.state == ReadingState::Clear && ink == self.palette.ink;
        let hue = if clear { theme::verdict_hue(self.palette, verdict) } else { self.palette.quiet };
        widget::verdict_mark(painter, at, verdict, hue);
    }

    pub(super) fn is_picked(&self, tone: &Tone, desk: &Desk) -> bool {
        is_picked(tone.frequency_hz, desk.session.picked_hz, self.shared.spacing_hz)
    }

    /// Where a tone's mark stands in this pane, if it is in sight.
    pub(super) fn mark<'t>(&self, tone: &'t Tone) -> Option<(&'t PaneReading, egui::Pos2)> {
        let reading = self.reading_of(tone)?;
        let shown = (self.frequency.lo..=self.frequency.hi).contains(&reading.peak_hz);
        // A residue has the tone taken out: its mark stands at the foot.
        let y = if self.pane.residue { self.area.bottom() - FOOT } else { self.level.at(reading.level_db) };
        let at = pos2(self.frequency.at(reading.peak_hz), y);
        (shown && reading.state != ReadingState::BelowFloor && self.area.contains(at)).then_some((reading, at))
    }
}

/// The verdict that stands: the one a user put in its place, else the one found.
pub(super) fn verdict_shown(tone: &Tone) -> Option<Verdict> {
    tone.overruled.as_ref().map(|o| o.verdict).or(tone.verdict)
}

/// What stands beside a mark: frequency and level, or, in a crowd, the frequency alone.
fn labels(tone: &Tone, reading: &PaneReading) -> [String; 2] {
    let hz = if reading.borrowed { tone.frequency_hz } else { reading.peak_hz };
    let hz = figure::fixed(hz, 2);
    [format!("{hz} Hz  {} dB", figure::fixed(reading.level_db, 1)), hz]
}
