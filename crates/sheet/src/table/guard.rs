//! Text cells that a spreadsheet would run as a formula (they begin with = + - @, a tab or a
//! return) leave with an apostrophe before them, and lose it when they come back
//! (OWASP, "CSV Injection").

const STARTERS: [char; 6] = ['=', '+', '-', '@', '\t', '\r'];

/// The cell as it leaves.
#[must_use]
pub fn guarded(text: &str) -> String {
    let risky = text.starts_with(STARTERS) || text.starts_with('\'');
    if risky {
        format!("'{text}")
    } else {
        text.to_string()
    }
}

/// The cell as it was before it left.
#[must_use]
pub fn unguarded(text: &str) -> &str {
    match text.strip_prefix('\'') {
        Some(rest) if rest.starts_with(STARTERS) || rest.starts_with('\'') => rest,
        _ => text,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_text_leaves_as_a_formula_and_all_come_back() {
        for text in [
            "=1+1", "+x", "-y", "@z", "'quoted", "''", "plain", "", "\tq", "it's",
        ] {
            let out = guarded(text);
            assert!(!out.starts_with(STARTERS), "{out}");
            assert_eq!(unguarded(&out), text);
        }
    }
}
