use phasewright::finding::Code;

#[test]
fn every_code_has_a_page_with_every_section() {
    for code in Code::ALL {
        let page = code.page();
        let heading = format!("# {}\n\n", code.text());
        assert!(page.starts_with(&heading), "{} has no heading", code.text());
        for section in [
            "## Why it matters\n\n",
            "## Example\n\n",
            "```show\n",
            "## How to mend it\n\n",
        ] {
            assert!(
                page.contains(section),
                "the page of {} lacks {section:?}",
                code.text()
            );
        }
    }
}

#[test]
fn every_summary_is_one_sentence() {
    for code in Code::ALL {
        let summary = code.summary();
        assert!(
            summary.ends_with('.') && summary.len() > 20,
            "{}: {summary}",
            code.text()
        );
    }
}

#[test]
fn pages_fit_a_terminal() {
    for code in Code::ALL {
        for line in code.page().lines() {
            assert!(line.chars().count() <= 100, "{}: {line}", code.text());
        }
    }
}

#[test]
fn a_code_is_found_by_its_text() {
    for code in Code::ALL {
        assert_eq!(Code::named(code.text()), Some(*code));
    }
    assert_eq!(Code::named("text/nothing"), None);
}
