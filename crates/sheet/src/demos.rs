//! Invented scenarios that a new user can open. Each says so (`invented`).

use crate::doc::Sheet;
use crate::json;
use widthwise_core::error::Answer;

/// (name, text) of each demo; the first is the one a page opens on.
pub const DEMOS: [(&str, &str); 3] = [
    ("saltmere", include_str!("../demos/saltmere.json")),
    ("greyfell", include_str!("../demos/greyfell.json")),
    ("ostrel", include_str!("../demos/ostrel.json")),
];

/// The sheet of a demo.
///
/// # Errors
/// There is no demo of this name.
pub fn open(name: &str) -> Answer<Sheet> {
    let text = DEMOS
        .iter()
        .find(|(known, _)| *known == name)
        .map(|(_, text)| *text)
        .ok_or_else(|| {
            widthwise_core::error::Refusal::new(
                "demo",
                name,
                DEMOS.map(|(known, _)| known).join(", "),
                "there is no demo of this name",
            )
        })?;
    json::open(text)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::check;

    #[test]
    fn every_demo_is_sound_and_says_that_it_is_invented() {
        for (name, text) in DEMOS {
            let sheet = open(name).unwrap();
            assert!(sheet.invented && sheet.note.contains("Invented"), "{name}");
            let understood = check::understand(&sheet);
            assert_eq!(understood.problems, Vec::new(), "{name}");
            let scan = understood.scan().unwrap();
            assert_eq!(scan.points.len(), sheet.data.rows.len());
            assert_eq!(json::open(&json::write(&sheet)).unwrap(), sheet, "{name}");
            assert_eq!(
                json::write(&sheet),
                text,
                "{name} is not as this program writes it"
            );
        }
    }

    #[test]
    fn the_dial_and_w_of_the_first_demo_hang_together() {
        let sheet = open("saltmere").unwrap();
        let (frame, _) = check::frame(&sheet).unwrap();
        for row in &sheet.data.rows {
            let setting = crate::quantity::read(
                row.setting.as_ref().unwrap(),
                crate::quantity::Dimension::Energy,
            )
            .unwrap();
            let w =
                crate::quantity::read(row.w.as_ref().unwrap(), crate::quantity::Dimension::Energy)
                    .unwrap();
            let from_dial = frame.w_of_setting(setting.value).unwrap();
            assert!((from_dial - w.value).abs() < 2e-6, "{}", row.id);
            assert!((frame.setting_of_w(w.value).unwrap() - setting.value).abs() < 1e-6);
        }
    }
}
