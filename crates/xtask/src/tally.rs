//! Adds up what the suites report.

/// Checks passed and failed, and the names of suites in which something failed.
#[derive(Default)]
pub struct Tally {
    /// Passed.
    pub passed: usize,
    /// Failed.
    pub failed: usize,
    /// Suites with failures.
    pub trouble: Vec<String>,
}

impl Tally {
    /// Adds one suite: what it printed, and whether its process ended well.
    pub fn add(&mut self, suite: &str, ended_well: bool, printed: &str) {
        let (passed, mut failed) = count(printed);
        // A suite that failed without saying how often, or that tested nothing, is one failure.
        if failed == 0 && (!ended_well || passed == 0) {
            failed = 1;
        }
        self.passed += passed;
        self.failed += failed;
        if failed > 0 {
            self.trouble.push(suite.to_owned());
        }
    }

    /// Adds one check that either holds or does not.
    pub fn check(&mut self, name: &str, outcome: Result<(), String>) {
        match outcome {
            Ok(()) => self.passed += 1,
            Err(message) => {
                println!("{name}: {message}");
                self.failed += 1;
                self.trouble.push(name.to_owned());
            }
        }
    }
}

/// Sums the result lines of cargo ("test result: ok. 3 passed; 0 failed"), of Vitest
/// ("Tests  1 failed | 3 passed (4)") and of our Python checks ("3 passed, 0 failed").
pub fn count(printed: &str) -> (usize, usize) {
    let (mut passed, mut failed) = (0, 0);
    for line in printed.lines() {
        let line = line.trim();
        let of_a_suite = line.starts_with("test result:")
            || line.starts_with("Tests ")
            || line.ends_with("failed");
        if !of_a_suite {
            continue;
        }
        let words: Vec<&str> = line
            .split([' ', ';', ',', '.'])
            .filter(|word| !word.is_empty())
            .collect();
        for pair in words.windows(2) {
            if let [number, what] = pair
                && let Ok(number) = number.parse::<usize>()
            {
                match *what {
                    "passed" => passed += number,
                    "failed" => failed += number,
                    _ => {}
                }
            }
        }
    }
    (passed, failed)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn result_lines_of_all_suites_are_counted() {
        assert_eq!(
            count("test result: ok. 12 passed; 0 failed; 0 ignored; 0 measured"),
            (12, 0)
        );
        assert_eq!(
            count("test result: FAILED. 3 passed; 2 failed; 0 ignored"),
            (3, 2)
        );
        assert_eq!(
            count(" Test Files  1 failed | 1 passed (2)\n      Tests  1 failed | 7 passed (8)"),
            (7, 1)
        );
        assert_eq!(count("      Tests  7 passed (7)"), (7, 0));
        assert_eq!(count("noise\n5 passed, 1 failed"), (5, 1));
        assert_eq!(count("this check passed after 3 tries"), (0, 0));
    }

    #[test]
    fn a_silent_suite_is_a_failure() {
        let mut tally = Tally::default();
        tally.add("silent", true, "");
        tally.add("broken", false, "test result: ok. 2 passed; 0 failed");
        assert_eq!((tally.passed, tally.failed), (2, 2));
        assert_eq!(tally.trouble, ["silent", "broken"]);
    }
}
