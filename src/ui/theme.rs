//! Paper and ink: colours, typeface, spacing. Contrast is held by a test.

use eframe::egui::{
    self, Color32, CornerRadius, FontData, FontDefinitions, FontFamily, FontId, Margin, Stroke, TextStyle, Theme,
    Visuals, vec2,
};

use crate::reading::Verdict;

/// The colours of one theme.
#[derive(Debug)]
pub(super) struct Palette {
    /// Behind everything.
    pub(super) paper: Color32,
    /// Behind curves and figures.
    pub(super) card: Color32,
    /// Figures, words, marks.
    pub(super) ink: Color32,
    /// What is there to be looked up.
    pub(super) quiet: Color32,
    /// Lines that part.
    pub(super) rule: Color32,
    /// Segment, hairline, what is chosen.
    pub(super) accent: Color32,
    /// Behind what is chosen.
    pub(super) selection: Color32,
    /// Words about what went wrong.
    pub(super) alarm: Color32,
    /// A hue a pane, from Okabe and Ito's set (Color Universal Design, 2008), shifted in lightness.
    pub(super) hues: [Color32; 7],
    /// A hue a verdict, in the order of [`verdict_hue`], from the same set.
    pub(super) verdicts: [Color32; 6],
}

const fn rgb(value: u32) -> Color32 {
    Color32::from_rgb((value >> 16) as u8, (value >> 8) as u8, value as u8)
}

const fn hues(values: [u32; 7]) -> [Color32; 7] {
    [rgb(values[0]), rgb(values[1]), rgb(values[2]), rgb(values[3]), rgb(values[4]), rgb(values[5]), rgb(values[6])]
}

const fn verdicts(values: [u32; 6]) -> [Color32; 6] {
    [rgb(values[0]), rgb(values[1]), rgb(values[2]), rgb(values[3]), rgb(values[4]), rgb(values[5])]
}

/// By daylight.
pub(super) static LIGHT: Palette = Palette {
    paper: rgb(0x00f7_f5f0),
    card: rgb(0x00ff_fdf9),
    ink: rgb(0x0022_303a),
    quiet: rgb(0x005a_666f),
    rule: rgb(0x00dc_d6ca),
    accent: rgb(0x001f_7a78),
    selection: rgb(0x00e4_efec),
    alarm: rgb(0x009c_3d00),
    hues: hues([0x0000_72b2, 0x00d5_5e00, 0x0000_9e73, 0x00c8_6fa0, 0x00bb_8100, 0x001c_93d6, 0x0097_8e0c]),
    verdicts: verdicts([0x0000_8060, 0x00a0_6a00, 0x0000_72b2, 0x00c4_4e00, 0x005a_666f, 0x00b0_5085]),
};

/// By night.
pub(super) static DARK: Palette = Palette {
    paper: rgb(0x001d_2429),
    card: rgb(0x0025_2d33),
    ink: rgb(0x00e8_e4da),
    quiet: rgb(0x00a6_b2b9),
    rule: rgb(0x003a_454c),
    accent: rgb(0x005f_b8b0),
    selection: rgb(0x002f_4145),
    alarm: rgb(0x00ff_9d5c),
    hues: hues([0x0000_82ca, 0x00d5_5e00, 0x0000_9e73, 0x00cc_79a7, 0x00e6_9f00, 0x0056_b4e9, 0x00f0_e442]),
    verdicts: verdicts([0x002f_c79c, 0x00e6_9f00, 0x0056_b4e9, 0x00ff_8340, 0x00a6_b2b9, 0x00e0_94bf]),
};

/// The colours of the theme in force.
pub(super) fn palette(ctx: &egui::Context) -> &'static Palette {
    if ctx.theme() == Theme::Dark { &DARK } else { &LIGHT }
}

/// The family of heads.
const SEMIBOLD: &str = "semibold";

/// Body text.
pub(super) const BODY: f32 = 13.0;
/// Quiet text.
pub(super) const QUIET: f32 = 11.0;
/// Heads.
pub(super) const HEAD: f32 = 15.0;

/// Body type.
pub(super) fn body() -> FontId {
    FontId::proportional(BODY)
}

/// Quiet type.
pub(super) fn quiet() -> FontId {
    FontId::proportional(QUIET)
}

/// The heavier cut at `size`; the ordinary one until the fonts are in place.
pub(super) fn heavy(ctx: &egui::Context, size: f32) -> FontId {
    let family = FontFamily::Name(SEMIBOLD.into());
    let known = ctx.fonts(|f| f.definitions().families.contains_key(&family));
    FontId::new(size, if known { family } else { FontFamily::Proportional })
}

/// Puts typeface, spacing and both themes in place.
pub(super) fn install(ctx: &egui::Context) {
    install_fonts(ctx);
    ctx.set_visuals_of(Theme::Light, visuals(Visuals::light(), &LIGHT));
    ctx.set_visuals_of(Theme::Dark, visuals(Visuals::dark(), &DARK));
    ctx.all_styles_mut(|style| {
        let mut set = |text, size| style.text_styles.insert(text, FontId::proportional(size));
        set(TextStyle::Body, BODY);
        set(TextStyle::Button, BODY);
        set(TextStyle::Small, QUIET);
        set(TextStyle::Heading, HEAD);
        style.spacing.item_spacing = vec2(8.0, 4.0);
        style.spacing.button_padding = vec2(8.0, 3.0);
        style.spacing.interact_size = vec2(24.0, 24.0);
        style.spacing.menu_margin = Margin::same(4);
        style.spacing.scroll = egui::style::ScrollStyle::thin();
        style.animation_time = 0.1;
    });
    ctx.options_mut(|options| {
        options.quit_shortcuts.clear();
        options.zoom_with_keyboard = false;
    });
}

fn install_fonts(ctx: &egui::Context) {
    let mut fonts = FontDefinitions::default();
    let regular = include_bytes!("../../assets/fonts/OpenSans-Regular.ttf");
    let semibold = include_bytes!("../../assets/fonts/OpenSans-Semibold.ttf");
    fonts.font_data.insert("regular".to_owned(), FontData::from_static(regular).into());
    fonts.font_data.insert(SEMIBOLD.to_owned(), FontData::from_static(semibold).into());
    let fallback = fonts.families.get(&FontFamily::Proportional).cloned().unwrap_or_default();
    let with = |first: &str| [vec![first.to_owned()], fallback.clone()].concat();
    fonts.families.insert(FontFamily::Proportional, with("regular"));
    fonts.families.insert(FontFamily::Name(SEMIBOLD.into()), with(SEMIBOLD));
    ctx.set_fonts(fonts);
}

fn visuals(mut v: Visuals, p: &Palette) -> Visuals {
    v.override_text_color = None;
    v.weak_text_color = Some(p.quiet);
    v.panel_fill = p.paper;
    v.window_fill = p.card;
    v.extreme_bg_color = p.card;
    v.text_edit_bg_color = Some(p.card);
    v.faint_bg_color = p.paper;
    v.code_bg_color = p.paper;
    v.hyperlink_color = p.accent;
    v.warn_fg_color = p.alarm;
    v.error_fg_color = p.alarm;
    v.window_stroke = Stroke::new(1.0, p.rule);
    v.window_corner_radius = CornerRadius::same(4);
    v.menu_corner_radius = CornerRadius::same(4);
    v.selection.bg_fill = p.selection;
    v.selection.stroke = Stroke::new(1.5, p.accent);
    v.slider_trailing_fill = true;
    let w = &mut v.widgets;
    for (state, fill, edge, ink) in [
        (&mut w.noninteractive, p.paper, p.rule, p.ink),
        (&mut w.inactive, p.card, p.rule, p.ink),
        (&mut w.hovered, p.selection, p.accent, p.ink),
        (&mut w.active, p.selection, p.accent, p.ink),
        (&mut w.open, p.selection, p.accent, p.ink),
    ] {
        state.bg_fill = fill;
        state.weak_bg_fill = fill;
        state.bg_stroke = Stroke::new(1.0, edge);
        state.fg_stroke = Stroke::new(1.0, ink);
        state.corner_radius = CornerRadius::same(3);
        state.expansion = 0.0;
    }
    v
}

/// The hue of the pane `id`, kept for its life, and whether its curve is dashed (the eighth and later).
pub(super) fn pane_hue(palette: &Palette, id: crate::session::PaneId) -> (Color32, bool) {
    let place = (id.0.max(1) - 1) as usize;
    (palette.hues[place % palette.hues.len()], place >= palette.hues.len())
}

/// The hue of a verdict's mark: green holds, amber is crowded, blue wanders, vermilion is disputed, grey is a skirt,
/// purple is faint. Shapes differ too.
pub(super) fn verdict_hue(palette: &Palette, verdict: Verdict) -> Color32 {
    let [holds, crowded, wanders, disputed, skirt, faint] = palette.verdicts;
    match verdict {
        Verdict::Holds => holds,
        Verdict::Crowded => crowded,
        Verdict::Wanders => wanders,
        Verdict::Disputed => disputed,
        Verdict::Skirt => skirt,
        Verdict::Faint => faint,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative luminance and contrast as WCAG 2.2 defines them.
    fn luminance(c: Color32) -> f64 {
        let channel = |v: u8| {
            let v = f64::from(v) / 255.0;
            if v <= 0.040_45 { v / 12.92 } else { ((v + 0.055) / 1.055).powf(2.4) }
        };
        0.2126 * channel(c.r()) + 0.7152 * channel(c.g()) + 0.0722 * channel(c.b())
    }

    fn contrast(a: Color32, b: Color32) -> f64 {
        let (a, b) = (luminance(a), luminance(b));
        (a.max(b) + 0.05) / (a.min(b) + 0.05)
    }

    #[test]
    fn words_stand_out_by_4_5_and_lines_by_3() {
        for p in [&LIGHT, &DARK] {
            for ground in [p.paper, p.card, p.selection] {
                for ink in [p.ink, p.quiet, p.alarm] {
                    assert!(contrast(ink, ground) >= 4.5, "{ink:?} on {ground:?}: {}", contrast(ink, ground));
                }
            }
            for ground in [p.paper, p.card] {
                assert!(contrast(p.accent, ground) >= 4.5, "accent on {ground:?}: {}", contrast(p.accent, ground));
            }
            assert!(contrast(p.accent, p.selection) >= 3.0);
            for (i, hue) in p.verdicts.into_iter().enumerate() {
                for ground in [p.paper, p.card, p.selection] {
                    assert!(contrast(hue, ground) >= 3.0, "verdict {i} on {ground:?}: {}", contrast(hue, ground));
                }
            }
            for hue in p.hues {
                assert!(contrast(hue, p.card) >= 3.0, "{hue:?}: {}", contrast(hue, p.card));
            }
        }
    }

    #[test]
    fn a_pane_keeps_its_hue_and_the_eighth_is_dashed() {
        use crate::session::PaneId;
        assert_eq!(pane_hue(&LIGHT, PaneId(1)), (LIGHT.hues[0], false));
        assert_eq!(pane_hue(&LIGHT, PaneId(8)), (LIGHT.hues[0], true));
        assert_eq!(pane_hue(&LIGHT, PaneId(0)).0, LIGHT.hues[0]);
    }
}
