//! The page in a real browser: what it does, what it asks for, how it reads and how it looks.

use crate::pages::{BENCH, made};
use crate::{here, missing, node, runs};
use std::path::{Path, PathBuf};

/// Three cues; the morph into the second asks for more than the motors can do.
const ROUND: &str = "show \"Round\"
rig \"x.rig\"
usual hold 6 s, morph 4 s
run-up 6 s
cue deltoid name \"First\"
cue 3:-1 morph 200 ms beam 50 %
cue 2:-3 morph 4 s dark
loop morph 5 s
";

const ONCE: &str = "show \"Once\"
rig \"x.rig\"
usual hold 5 s, morph 4 s
run-up 6 s
cue deltoid
cue 3:-1
run-down 6 s
";

const MANY: &str = "show \"Many\"
rig \"x.rig\"
usual hold 1 s, morph 4 s
run-up 6 s
repeat 1500 {
  cue deltoid
  cue 3:-1
}
loop morph 4 s
";

const EVIL: &str = "</script><script>document.title=1</script><img src=x onerror='document.title=2'>\u{2028}\u{202e}& '";

/// The browser, where there is one.
fn chromium() -> Option<PathBuf> {
    let path = std::env::var_os("PATH")?;
    std::env::split_paths(&path)
        .map(|folder| folder.join("chromium"))
        .find(|program| program.is_file())
}

#[test]
fn the_page_in_chromium() {
    let Some(chromium) = chromium() else {
        return missing("chromium", "the page was not opened");
    };
    if !runs("node") {
        return missing("node", "the page was not opened");
    }
    if !here().join("node_modules/playwright-core").is_dir()
        || !here().join("node_modules/axe-core").is_dir()
    {
        return missing(
            "tests/page/node_modules (`npm ci --prefix tests/page` makes it)",
            "the page was not opened",
        );
    }
    let folder = tempfile::tempdir().unwrap();
    let hostile = ROUND
        .replace("\"Round\"", &format!("\"{EVIL}\""))
        .replace("\"First\"", &format!("\"{EVIL}\""));
    for (name, show) in [
        ("round", ROUND),
        ("once", ONCE),
        ("many", MANY),
        ("hostile", hostile.as_str()),
    ] {
        let page = made(show, BENCH).page();
        std::fs::write(folder.path().join(format!("{name}.html")), page).unwrap();
    }
    let said = node("browser.mjs", &[Path::new(&chromium), folder.path()]);
    eprintln!("{said}");
    assert!(said.contains("all checks passed"), "{said}");
}
