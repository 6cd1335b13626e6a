//! What can be seen of a page without opening it.

use crate::pages::{BENCH, EXAMPLES, example, made};
use phasewright::preview::svg::MARK;

/// The part of a page between two marks.
fn between<'t>(text: &'t str, from: &str, to: &str) -> &'t str {
    let rest = text.split_once(from).unwrap().1;
    rest.split_once(to).unwrap().0
}

#[test]
fn a_page_is_one_file_that_names_no_other() {
    for (show, rig) in EXAMPLES {
        let page = made(&example(show), &example(rig)).page();
        assert!(page[..2048].contains(MARK), "known as an own file");
        assert!(page.len() < 200_000, "{show}: {}", page.len());
        assert!(!page.contains("<!--@"), "every place is filled");
        for foreign in [
            "http:",
            "https:",
            "src=",
            "@import",
            "url(",
            "NaN",
            "null,null",
        ] {
            assert!(!page.contains(foreign), "{show} has {foreign}");
        }
        assert!(page.contains("default-src 'none'"));
        assert!(page.contains("Laser light can injure an eye"));
        assert!(page.contains("clears nothing"));
    }
}

/// Whatever a title says: it can neither end an element nor begin one.
#[test]
fn titles_stay_text() {
    let evil = "</script><script>alert(1)</script><img src=x onerror=alert(2)>\u{2028}<!--@title--> & ' <!-- ";
    let show = format!(
        "show \"{evil}\"\nrig \"x.rig\"\nusual hold 2 s, morph 4 s\ncue 2:-1 name \"{evil}\"\ncue 3:-1\nloop morph 4 s\n"
    );
    let rig = BENCH.replace("Test bench", evil);
    let made = made(&show, &rig);
    let page = made.page();
    assert_eq!(
        page.matches("<script").count(),
        2,
        "the data and the script"
    );
    assert_eq!(page.matches("</script").count(), 2);
    assert!(!page.contains("<img"));
    let data = between(&page, "id=\"scene\">", "</script>");
    let scene: serde_json::Value = serde_json::from_str(data).unwrap();
    assert_eq!(scene["title"], evil, "the data says it as it was written");
    assert_eq!(scene["cues"][0]["name"], evil);
    assert!(between(&page, "<title>", "</title>").contains("&lt;!--@title--&gt;"));
}

/// Moves, not rows: a day is as short as a minute.
#[test]
fn a_day_long_show_is_a_small_page() {
    let show = "show \"a day\"\nrig \"x.rig\"\nusual hold 2 h, morph 4 s\nrepeat 4 {\n cue 2:-1\n cue 3:-1\n cue 4:-1\n}\nloop morph 4 s\n";
    let made = made(show, BENCH);
    assert!(made.scene.run_s.0 > 86_000.0);
    let length = made.page().len();
    assert!(length < 120_000, "{length}");
}

/// The page of a very long show ends early, says so, and does not claim to go round.
#[test]
fn a_show_with_very_many_cues_ends_early_on_the_page() {
    let show = "show \"many\"\nrig \"x.rig\"\nusual hold 1 s, morph 2 s\nrepeat 6000 {\n cue 2:-1\n cue 3:-1\n}\nloop morph 4 s\n";
    let made = made(show, BENCH);
    assert_eq!(made.scene.legs.len(), 20_000);
    assert_eq!(made.scene.cues.len() + made.scene.left_out, 12_000);
    assert!(made.scene.left_out > 1000 && made.scene.loop_start_s.is_none());
    assert!(made.page().contains("more are not on it"));
}
