//! The window of the desktop: draws state, sends commands; holds no numerics.
//!
//! [`run`] opens it. [`Workbench`] is all of it but the window, so that tests can drive it without a display.

mod act;
mod action;
mod app;
mod card;
mod carry;
mod desk;
mod dialog;
mod empty;
mod figure;
mod files;
mod keep;
mod lane;
mod menu;
mod notice;
mod pane;
mod pane_head;
mod pane_menu;
mod panes;
mod plot;
mod services;
mod setup;
mod setup_scale;
mod status;
mod strip;
mod table;
#[cfg(test)]
mod tests;
mod theme;
mod view;
mod widget;
mod workbench;
mod worker;

pub use app::{RunError, run};
pub use services::{Ask, DesktopPicker, Picker, Services};
pub use workbench::Workbench;
