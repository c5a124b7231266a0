//! Columns of a table and the fields of a row they stand for.

use crate::doc::{Dial, LuminositySource, Row};
use crate::quantity::Dimension;

/// What a column can mean.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
#[allow(missing_docs)]
pub enum Field {
    Id,
    Start,
    Stop,
    Group,
    Setting,
    W,
    WError,
    SigmaW,
    Luminosity,
    LuminosityError,
    LuminositySource,
    OtherLuminosity,
    LiveFraction,
    LiveTime,
    Counts,
    OffCounts,
    Tau,
    Efficiency,
    EfficiencyError,
    Channel,
    CrossSection,
    CrossSectionError,
    LeftOut,
    Running,
    Comment,
}

/// All fields, in the order in which a table is written.
pub const ALL: [Field; 25] = [
    Field::Id,
    Field::Start,
    Field::Stop,
    Field::Group,
    Field::Setting,
    Field::W,
    Field::WError,
    Field::SigmaW,
    Field::Luminosity,
    Field::LuminosityError,
    Field::LuminositySource,
    Field::OtherLuminosity,
    Field::LiveFraction,
    Field::LiveTime,
    Field::Counts,
    Field::OffCounts,
    Field::Tau,
    Field::Efficiency,
    Field::EfficiencyError,
    Field::Channel,
    Field::CrossSection,
    Field::CrossSectionError,
    Field::LeftOut,
    Field::Running,
    Field::Comment,
];

impl Field {
    /// Name in requests and in headers that we write: that of the row's field.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Id => "id",
            Self::Start => "start",
            Self::Stop => "stop",
            Self::Group => "group",
            Self::Setting => "setting",
            Self::W => "w",
            Self::WError => "w_error",
            Self::SigmaW => "sigma_w",
            Self::Luminosity => "luminosity",
            Self::LuminosityError => "luminosity_error",
            Self::LuminositySource => "luminosity_source",
            Self::OtherLuminosity => "other_luminosity",
            Self::LiveFraction => "live_fraction",
            Self::LiveTime => "live_time",
            Self::Counts => "counts",
            Self::OffCounts => "off_counts",
            Self::Tau => "tau",
            Self::Efficiency => "efficiency",
            Self::EfficiencyError => "efficiency_error",
            Self::Channel => "channel",
            Self::CrossSection => "cross_section",
            Self::CrossSectionError => "cross_section_error",
            Self::LeftOut => "left_out",
            Self::Running => "running",
            Self::Comment => "comment",
        }
    }

    /// The field of that name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        ALL.into_iter().find(|field| field.name() == name)
    }

    /// What its numbers measure; `None` for text and flags.
    #[must_use]
    pub fn dimension(self, dial: Dial) -> Option<Dimension> {
        Some(match self {
            Self::Setting if dial == Dial::Momentum => Dimension::Momentum,
            Self::Setting | Self::W | Self::WError | Self::SigmaW => Dimension::Energy,
            Self::Luminosity | Self::LuminosityError | Self::OtherLuminosity => {
                Dimension::Luminosity
            }
            Self::LiveTime => Dimension::Time,
            Self::CrossSection | Self::CrossSectionError => Dimension::CrossSection,
            Self::LiveFraction
            | Self::Counts
            | Self::OffCounts
            | Self::Tau
            | Self::Efficiency
            | Self::EfficiencyError => Dimension::Number,
            _ => return None,
        })
    }

    /// The text of this field in a row; `None` if it is absent.
    #[must_use]
    pub fn get(self, row: &Row) -> Option<String> {
        let flag = |set: bool| set.then(|| "yes".to_string());
        match self {
            Self::Id => Some(row.id.clone()),
            Self::LeftOut => flag(row.left_out),
            Self::Running => flag(row.running),
            Self::Comment => Some(row.comment.clone()).filter(|text| !text.is_empty()),
            Self::LuminositySource => row.luminosity_source.map(|source| {
                match source {
                    LuminositySource::Online => "online",
                    LuminositySource::Final => "final",
                }
                .to_string()
            }),
            _ => self.slot(&mut row.clone()).and_then(|slot| slot.clone()),
        }
    }

    /// Puts a cell's text into a row.
    ///
    /// # Errors
    /// What is allowed, for fields that are words: flags and the luminosity's source.
    pub fn put(self, row: &mut Row, text: String) -> Result<(), &'static str> {
        match self {
            Self::Id => row.id = text,
            Self::Comment => row.comment = text,
            Self::LeftOut => row.left_out = flag(&text)?,
            Self::Running => row.running = flag(&text)?,
            Self::LuminositySource => {
                row.luminosity_source = Some(match text.to_lowercase().as_str() {
                    "online" | "on-line" | "monitor" => LuminositySource::Online,
                    "final" | "offline" | "off-line" => LuminositySource::Final,
                    _ => return Err("online or final"),
                });
            }
            _ => {
                if let Some(slot) = self.slot(row) {
                    *slot = Some(text);
                }
            }
        }
        Ok(())
    }

    fn slot(self, row: &mut Row) -> Option<&mut Option<String>> {
        Some(match self {
            Self::Start => &mut row.start,
            Self::Stop => &mut row.stop,
            Self::Group => &mut row.group,
            Self::Setting => &mut row.setting,
            Self::W => &mut row.w,
            Self::WError => &mut row.w_error,
            Self::SigmaW => &mut row.sigma_w,
            Self::Luminosity => &mut row.luminosity,
            Self::LuminosityError => &mut row.luminosity_error,
            Self::OtherLuminosity => &mut row.other_luminosity,
            Self::LiveFraction => &mut row.live_fraction,
            Self::LiveTime => &mut row.live_time,
            Self::Counts => &mut row.counts,
            Self::OffCounts => &mut row.off_counts,
            Self::Tau => &mut row.tau,
            Self::Efficiency => &mut row.efficiency,
            Self::EfficiencyError => &mut row.efficiency_error,
            Self::Channel => &mut row.channel,
            Self::CrossSection => &mut row.cross_section,
            Self::CrossSectionError => &mut row.cross_section_error,
            _ => return None,
        })
    }
}

fn flag(text: &str) -> Result<bool, &'static str> {
    match text.to_lowercase().as_str() {
        "yes" | "y" | "1" | "true" | "x" => Ok(true),
        "no" | "n" | "0" | "false" | "" => Ok(false),
        _ => Err("yes or no"),
    }
}
