//! Ranges of trials made apart and merged are the text of one run.
#![allow(clippy::unwrap_used)]

use std::path::Path;
use std::process::Command;

fn batch(words: &[&str]) -> (i32, String, String) {
    let done = Command::new(env!("CARGO_BIN_EXE_widthwise-batch"))
        .args(words)
        .output()
        .unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    (
        done.status.code().unwrap(),
        text(done.stdout),
        text(done.stderr),
    )
}

#[test]
fn ranges_merge_to_the_bits_of_one_run() {
    let sheet = concat!(env!("CARGO_MANIFEST_DIR"), "/../sheet/demos/ostrel.json");
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR"));
    let range = |first: &str, count: &str| {
        let (code, text, _) = batch(&[
            "trials", sheet, "--seed", "7", "--first", first, "--count", count,
        ]);
        assert_eq!(code, 0);
        let path = folder.join(format!("range-{first}-{count}.json"));
        std::fs::write(&path, &text).unwrap();
        (path.to_str().unwrap().to_string(), text)
    };
    let (_, whole) = range("0", "7");
    let (first, _) = range("0", "3");
    let (second, _) = range("3", "4");
    // In the wrong order on purpose.
    let (code, merged, _) = batch(&["merge", sheet, &second, &first]);
    assert_eq!(code, 0);
    assert_eq!(merged, whole);
    let (code, _, told) = batch(&["merge", sheet, &first, &first]);
    assert_eq!(code, 1);
    assert!(told.contains("two of the files"), "{told}");
    assert_eq!(batch(&["merge", sheet]).0, 2);
}
