//! Times of a shift: RFC 3339 with a zone offset, over the crate jiff. No clock, no zone database.

use jiff::Timestamp;
use widthwise_core::error::{Answer, Refusal};

/// Reads "2026-11-30T22:10:00+01:00" (seconds may be missing).
///
/// # Errors
/// Text that is no time, or a time without zone: two people would read two times.
pub fn parse(path: &str, text: &str) -> Answer<Timestamp> {
    let trimmed = text.trim();
    trimmed.parse::<Timestamp>().map_err(|_| {
        let message = if trimmed.parse::<jiff::civil::DateTime>().is_ok() {
            "the time has no zone: add Z or an offset such as +01:00"
        } else {
            "this is no date and time"
        };
        Refusal::new(
            path,
            text,
            "a time with zone, such as 2026-11-30T22:10:00+01:00",
            message,
        )
    })
}

/// Hours from one time to another.
#[must_use]
pub fn hours_between(from: Timestamp, to: Timestamp) -> f64 {
    let milliseconds = to.as_millisecond() - from.as_millisecond();
    milliseconds as f64 / 3.6e6
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn zones_count() {
        let a = parse("start", "2026-11-30T22:10:00+01:00").unwrap();
        let b = parse("stop", "2026-11-30T22:10Z").unwrap();
        assert_eq!(hours_between(a, b), 1.0);
    }

    #[test]
    fn times_without_zone_and_nonsense_are_refused() {
        let refused = parse("start", "2026-11-30T22:10:00").unwrap_err();
        assert!(refused.message.contains("zone"));
        for text in ["", "yesterday", "2026-13-01T00:00:00Z", "22:10"] {
            assert!(
                parse("start", text)
                    .unwrap_err()
                    .message
                    .contains("no date")
            );
        }
    }
}
