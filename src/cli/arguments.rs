//! What can be given on the command line.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand};

use super::grammar::{
    SegmentWish, WindowList, count, detector, duration, kind, of_scale, positive, quantity, rate, refusal, removal,
    segment, tone, windows,
};
use crate::session::{HandTone, Refusal};
use crate::signal::Removal;
use crate::tone::Kind;
use crate::units::{Detector, Quantity};

const EXAMPLES: &str = "\
Examples:
  panewise pump2.wav                       open a capture in the window
  panewise pump2.session.ron               open a saved session
  panewise read pump2.wav                  read the steady part, print the tone table
  panewise read pump2.wav --segment 9..33 --save pump2.session.ron
  panewise recheck pump2.session.ron       compute all anew: does every figure stand?
  panewise windows                         the windows and their figures of merit
  panewise windows --kernel hann,flat-top --duration 24 > kernels.svg

Exit status: 0 done; 1 the work found a problem (a recheck that differs); 2 bad usage or input.";

const READ_EXAMPLES: &str = "\
Examples:
  panewise read pump2.wav --segment 9.0..33.0 --windows hann,flat-top,kaiser=8.6
  panewise read pump2.wav --unit m/s² --factor 500 --save pump2.session.ron
  panewise read pump2.wav --fundamental 24.96 --refuse '50,pick-up of the cable' --by 'N. Name'
  panewise read fan.wav --unit Pa --sensitivity 0.05 --full-scale-volts 10 --json
  panewise read pump2.session.ron --csv    read what a saved session asks for

Levels are corrected for the window's gain, the place between two lines, the mirror image and
what the removed mean took along. Frequency and level of a row are those of all tones fitted together;
a pane's columns are what its window reads. A reading is 'clear', 'crowded' (another tone in the pane's
main lobe), 'under-skirt' (leakage of other tones moves it) or 'below-floor'. Tags say what a row belongs to, where
chance would hardly make it look so: the mains, a series of harmonics, sidebands, products, images, folds.";

/// From a recorded capture to a signed figure: mark a steady segment, lay several DFT windows over it side by side,
/// read each tone's frequency and corrected level.
#[derive(Debug, Parser)]
#[command(name = "panewise", version, args_conflicts_with_subcommands = true, after_help = EXAMPLES)]
pub(super) struct Arguments {
    /// What to open in the window; without it the demonstration capture, where it is found
    #[arg(value_name = "CAPTURE|SESSION")]
    pub start: Option<PathBuf>,
    #[command(subcommand)]
    pub task: Option<Task>,
}

#[derive(Debug, Subcommand)]
pub(super) enum Task {
    /// Read the tones of a segment and print the tone table
    Read(Box<ReadWish>),
    /// Compute a saved session anew and say whether every figure stands
    Recheck(RecheckWish),
    /// List the DFT windows with their figures of merit
    Windows(WindowsWish),
}

#[derive(Debug, Args)]
#[command(after_help = READ_EXAMPLES)]
pub(super) struct ReadWish {
    /// The recording, or a saved session (.session.ron), which is read as it asks
    #[arg(value_name = "CAPTURE|SESSION")]
    pub input: PathBuf,

    /// Channel, counted from 1 [default: 1]
    #[arg(long, value_name = "K", value_parser = count, allow_hyphen_values = true, help_heading = "What to read")]
    pub channel: Option<usize>,
    /// Segment in seconds (9.0..33.0) or samples (0n..4096n), END exclusive [default: the longest steady stretch]
    #[arg(long, value_name = "START..END", value_parser = segment, allow_hyphen_values = true, help_heading = "What to read")]
    pub segment: Option<SegmentWish>,
    /// Windows, one a pane, 1 to 8, as 'panewise windows' lists them
    /// [default: rectangular,hann,hamming,blackman,blackman-harris,flat-top]
    #[arg(long, value_name = "NAME[=PARAM],...", value_parser = windows, help_heading = "What to read")]
    pub windows: Option<WindowList>,
    /// What the segment holds, in the place of what is found: tones, random or transient
    #[arg(long, value_name = "KIND", value_parser = kind, help_heading = "What to read")]
    pub kind: Option<Kind>,
    /// What is taken out of the segment first: none, mean or line [default: mean]
    #[arg(long, value_name = "WHAT", value_parser = removal, help_heading = "What to read")]
    pub remove: Option<Removal>,
    /// Samples a second, in place of what the file says
    #[arg(long, value_name = "HZ", value_parser = rate, allow_negative_numbers = true, help_heading = "What to read")]
    pub rate: Option<f64>,

    #[command(flatten)]
    pub scale: ScaleWish,
    #[command(flatten)]
    pub search: SearchWish,

    /// Print one JSON object
    #[arg(long, help_heading = "Output", conflicts_with = "csv")]
    pub json: bool,
    /// Print the tone table as comma-separated values
    #[arg(long, help_heading = "Output")]
    pub csv: bool,
    /// Save the session with its figures, for the window and for 'panewise recheck'
    #[arg(long, value_name = "NAME.session.ron", help_heading = "Output")]
    pub save: Option<PathBuf>,
    /// Let --save replace a session that is there already
    #[arg(long, help_heading = "Output", requires = "save")]
    pub replace: bool,
}

#[derive(Debug, Args)]
#[command(next_help_heading = "Scale")]
pub(super) struct ScaleWish {
    /// What the channel measures: acceleration, velocity, displacement, force, sound-pressure, voltage, current,
    /// strain or plain [default: the unit's]
    #[arg(long, value_name = "Q", value_parser = quantity)]
    pub quantity: Option<Quantity>,
    /// Unit: m/s², g, mm/s, Pa, V, ... [default: the quantity's SI unit; FS without a scale]
    #[arg(long, value_name = "U")]
    pub unit: Option<String>,
    /// Units per full scale
    #[arg(long, value_name = "F", value_parser = of_scale, allow_negative_numbers = true, conflicts_with = "sensitivity")]
    pub factor: Option<f64>,
    /// Volts per unit, of the sensor with its amplifier
    #[arg(long, value_name = "S", value_parser = of_scale, allow_negative_numbers = true, requires = "full_scale_volts")]
    pub sensitivity: Option<f64>,
    /// Volts at full scale of the input
    #[arg(long, value_name = "V", value_parser = of_scale, allow_negative_numbers = true, requires = "sensitivity")]
    pub full_scale_volts: Option<f64>,
    /// What a level states: rms, peak or peak-to-peak [default: rms]
    #[arg(long, value_name = "D", value_parser = detector)]
    pub detector: Option<Detector>,
    /// Reference of levels in decibels, in the unit [default: ISO 1683's for the quantity, else 1]
    #[arg(long, value_name = "R", value_parser = of_scale, allow_negative_numbers = true)]
    pub reference: Option<f64>,
}

#[derive(Debug, Args)]
#[command(next_help_heading = "Search")]
pub(super) struct SearchWish {
    /// Name a tone by hand; ',held' keeps its frequency as given. May be given several times
    #[arg(long, value_name = "HZ[,held]", value_parser = tone, allow_negative_numbers = true)]
    pub tone: Vec<HandTone>,
    /// List no tone at a place, and say why; what stands there is still taken off the others. May be given several times
    #[arg(long, value_name = "HZ[,WHY]", value_parser = refusal, allow_negative_numbers = true)]
    pub refuse: Vec<Refusal>,
    /// Who names and refuses tones
    #[arg(long, value_name = "NAME")]
    pub by: Option<String>,
    /// Count orders by this frequency, a shaft's speed of turning; a tone within half a line of it is followed
    #[arg(long, value_name = "HZ", value_parser = positive, allow_negative_numbers = true)]
    pub fundamental: Option<f64>,
    /// At most so many tones; the weakest over their floor are left out [default: 200]
    #[arg(long, value_name = "K", value_parser = count, allow_negative_numbers = true)]
    pub max_tones: Option<usize>,
    /// The chance that noise alone gives any tone at all [default: 0.001]
    #[arg(long, value_name = "P", value_parser = positive, allow_negative_numbers = true)]
    pub false_alarm: Option<f64>,
}

#[derive(Debug, Args)]
pub(super) struct RecheckWish {
    /// The saved session
    pub session: PathBuf,
    /// Print one JSON object
    #[arg(long)]
    pub json: bool,
}

#[derive(Debug, Args)]
pub(super) struct WindowsWish {
    /// Print a JSON array
    #[arg(long, conflicts_with = "kernel")]
    pub json: bool,
    /// Print a figure (SVG) of these windows' kernels, drawn over one another in Hz
    #[arg(long, value_name = "NAME[=PARAM],...", value_parser = windows, requires = "duration")]
    pub kernel: Option<WindowList>,
    /// The segment's duration for the figure, in seconds
    #[arg(long, value_name = "SECONDS", value_parser = duration, allow_negative_numbers = true, requires = "kernel")]
    pub duration: Option<f64>,
}
