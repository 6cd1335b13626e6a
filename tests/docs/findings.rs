//! Every finding has a page that `explain` prints, stands in the reference, and is drawn by a wrong show.

use crate::{read, root, run, said};
use phasewright::finding::Code;

#[test]
fn every_code_has_a_page_with_its_name_an_example_and_a_way_out() {
    for code in Code::ALL {
        let page = code.page();
        assert!(
            page.starts_with(&format!("# {}", code.text())),
            "the page of {}",
            code.text()
        );
        // A title alone is no page: it says what it means, shows it, and says how to mend it.
        assert!(
            page.len() > 300,
            "the page of {} is a stub:\n{page}",
            code.text()
        );
        assert!(
            page.contains("```"),
            "the page of {} has no example",
            code.text()
        );
    }
}

#[test]
fn explain_prints_the_page() {
    for code in Code::ALL {
        let output = run(&["explain", code.text()]);
        assert!(output.status.success(), "{}", said(&output));
        let printed = String::from_utf8_lossy(&output.stdout);
        assert!(printed.contains(code.text()), "{printed}");
    }
}

#[test]
fn every_page_belongs_to_a_code() {
    let pages = root().join("src/finding/pages");
    for area in std::fs::read_dir(&pages).unwrap() {
        let area = area.unwrap().path();
        if !area.is_dir() {
            continue;
        }
        for page in std::fs::read_dir(&area).unwrap() {
            let page = page.unwrap().path();
            let (area, what) = (area.file_name().unwrap(), page.file_stem().unwrap());
            let text = format!("{}/{}", area.to_str().unwrap(), what.to_str().unwrap());
            assert!(
                Code::ALL.iter().any(|code| code.text() == text),
                "no code has the page {text}"
            );
        }
    }
}

#[test]
fn the_reference_lists_every_code() {
    let reference = read("docs/language.md");
    for code in Code::ALL {
        assert!(
            reference.contains(&format!("`{}`", code.text())),
            "{} is not in docs/language.md",
            code.text()
        );
    }
}
