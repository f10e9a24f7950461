//! The window of the desktop: draws state, sends commands; holds no numerics.
//!
//! [`run`] opens it. [`Workbench`] is all of it but the window, so that tests can drive it without a display.

mod act;
mod action;
mod advice;
mod app;
mod card;
mod card_tone;
mod carry;
mod chooser;
mod chooser_table;
mod decide;
mod demonstration;
mod desk;
mod dialog;
mod empty;
mod figure;
mod files;
mod keep;
mod lane;
mod list;
mod menu;
mod merits;
mod notice;
mod overlay;
mod pane;
mod pane_head;
mod pane_layers;
mod pane_marks;
mod pane_menu;
mod panes;
mod parameters;
mod parts;
mod plot;
mod preferences;
mod ribbon;
mod services;
mod setup;
mod setup_hands;
mod setup_kind;
mod setup_rate;
mod setup_scale;
mod setup_search;
mod status;
mod strip;
mod survey;
mod table;
#[cfg(test)]
mod tests;
mod theme;
mod typed;
mod upkeep;
mod view;
mod widget;
mod workbench;
mod worker;

pub use app::{RunError, run};
pub use services::{Ask, DesktopPicker, Picker, Services};
pub use workbench::Workbench;
