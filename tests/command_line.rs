//! The command line as a person meets it: options, inputs, messages and exit statuses.

mod helper;

use helper::Scratch;
use std::io::Read;
use std::process::Stdio;

const AGREES: &str = "Diary keepers watered less often, t(28) = 2.20, p = .036.\n";
const CONFLICTS: &str = "Diary keepers watered less often, t(28) = 2.20, p = .016.\n";
const REVERSES: &str = "Diary keepers watered less often, t(28) = 2.20, p = .063.\n";

const CAUTIONS: &str = "
Every finding is a question, not an accusation. Look at the original first: the
document may have been misread here, a number may have been rounded twice, the
test may be an unusual one, or the data may not be the whole numbers they seem
to be. A conflict is most often a typing slip. If a question remains, follow the
procedure of your journal or institution. Nothing here diagnoses misconduct.
";

fn json(out: &str) -> serde_json::Value {
    serde_json::from_str(out).unwrap_or_else(|e| panic!("not JSON ({e}): {out}"))
}

#[test]
fn the_exit_status_tells_what_was_found() {
    let s = Scratch::new();
    s.file("agrees.txt", AGREES)
        .file("conflicts.txt", CONFLICTS)
        .file("reverses.txt", REVERSES);
    assert_eq!(s.run(&["check", "agrees.txt"]).status, 0);
    assert_eq!(s.run(&["check", "conflicts.txt"]).status, 1);
    assert_eq!(s.run(&["check", "reverses.txt"]).status, 1);
    assert_eq!(s.run(&["check", "agrees.txt", "conflicts.txt"]).status, 1);
    assert_eq!(s.run(&["check", "conflicts.txt", "missing.txt"]).status, 2);
    assert_eq!(s.run(&["try", "t(28) = 2.20, p = .036"]).status, 0);
    assert_eq!(s.run(&["try", "t(28) = 2.20, p = .063"]).status, 1);
    // What is shown does not change what was found.
    assert_eq!(s.run(&["check", "conflicts.txt", "--show", "reverses"]).status, 1);
    assert_eq!(
        s.run(&["check", "conflicts.txt", "--format", "text-only"]).status,
        0
    );
}

#[test]
fn a_missing_file_is_one_line_and_status_2() {
    let s = Scratch::new();
    s.run(&["check", "draft.docx"])
        .is("", "tieout: draft.docx: no such file; check the path\n", 2);
}

#[test]
fn an_unreadable_file_in_the_middle_leaves_the_others_alone() {
    let s = Scratch::new();
    s.file("a.txt", AGREES).file("c.txt", AGREES);
    let run = s.run(&["check", "a.txt", "b.txt", "c.txt"]);
    assert_eq!(run.err, "tieout: b.txt: no such file; check the path\n");
    assert_eq!(run.status, 2);
    let one = |name: &str| {
        format!(
            "── {name} {} no conflicts ──

1 statement with 3 numbers read, 1 check made: 1 agrees; nothing conflicts.
Checked: p-from-t 1×.
",
            "─".repeat(55)
        )
    };
    let end = "\nOf 3 manuscripts 2 have none and 1 could not be read.\n";
    assert_eq!(
        run.out,
        [&one("a.txt"), "\n", &one("c.txt"), end, CAUTIONS].concat()
    );

    let read = json(
        &s.run(&["check", "a.txt", "b.txt", "c.txt", "--format", "json"])
            .out,
    );
    let documents = read["documents"].as_array().expect("a list");
    let unreadable: Vec<_> = documents.iter().map(|d| d["unreadable"].as_str()).collect();
    assert_eq!(unreadable, [None, Some("no such file; check the path"), None]);
    assert_eq!(documents[1]["path"], "b.txt");
}

#[test]
fn bad_usage_is_status_2() {
    let s = Scratch::new();
    s.file("a.txt", AGREES);
    for arguments in [
        &[][..],
        &["check"],
        &["water"],
        &["check", "a.txt", "--format", "html"],
        &["check", "a.txt", "--show", "some"],
        &["check", "a.txt", "--alpha", "1.5"],
        &["check", "a.txt", "--alpha", "five"],
        &["check", "a.txt", "--jobs", "0"],
        &["check", "a.txt", "--only", "p-form-t"],
        &["check", "a.txt", "--grammar", "missing.toml"],
        &["try"],
        &["explain", "watering"],
    ] {
        let run = s.run(arguments);
        assert_eq!((run.status, run.out.as_str()), (2, ""), "{arguments:?}: {run:?}");
        assert!(!run.err.is_empty(), "{arguments:?}");
        assert!(!run.err.contains("panicked"), "{arguments:?}: {run:?}");
    }
}

#[test]
fn an_unknown_relation_is_answered_with_close_names() {
    let s = Scratch::new();
    for arguments in [
        &["explain", "p-form-t"][..],
        &["check", "a.txt", "--only", "p-form-t"],
        &["try", "p = .05", "--skip", "p-form-t"],
    ] {
        let run = s.run(arguments);
        let begins = "tieout: there is no relation \"p-form-t\"; did you mean p-from-t";
        assert!(run.err.starts_with(begins), "{run:?}");
        assert!(
            run.err.ends_with("\"tieout explain\" lists them all\n"),
            "{run:?}"
        );
        assert_eq!((run.status, run.out.as_str()), (2, ""));
    }
}

#[test]
fn relations_can_be_chosen_and_left_out() {
    let s = Scratch::new();
    s.file("a.txt", CONFLICTS);
    assert_eq!(s.run(&["check", "a.txt", "--only", "p-from-t"]).status, 1);
    assert_eq!(s.run(&["check", "a.txt", "--skip", "p-from-t"]).status, 0);
    assert_eq!(
        s.run(&[
            "check",
            "a.txt",
            "--only",
            "p-from-t,p-from-t",
            "--only",
            "p-from-t"
        ])
        .status,
        1
    );
}

#[test]
fn the_level_of_significance_decides_what_reverses() {
    let s = Scratch::new();
    let verdict = |more: &[&str]| {
        let arguments = [&["try", "t(28) = 2.20, p = .016", "--format", "ndjson"][..], more].concat();
        json(&s.run(&arguments).out)["findings"][0]["verdict"].clone()
    };
    assert_eq!(verdict(&[]), "conflicts");
    assert_eq!(verdict(&["--alpha", ".02"]), "reverses");
    assert_eq!(verdict(&["--one-sided"]), "agrees".replace("agrees", "conflicts"));
    assert_eq!(
        json(
            &s.run(&[
                "try",
                "t(28) = 2.20, p = .018",
                "--one-sided",
                "--format",
                "ndjson"
            ])
            .out
        )["findings"][0]["verdict"],
        "agrees"
    );
}

#[test]
fn a_folder_is_read_in_the_order_of_its_paths() {
    let s = Scratch::new();
    for name in [
        "plots/b.txt",
        "plots/a/z.MD",
        "plots/c.txt",
        "plots/notes.csv",
        "plots/.hidden.txt",
        "plots/~$b.txt",
    ] {
        s.file(name, AGREES);
    }
    for jobs in ["1", "4"] {
        let run = s.run(&["check", "plots", "--format", "ndjson", "--jobs", jobs]);
        let paths: Vec<String> = run
            .out
            .lines()
            .map(|line| json(line)["path"].as_str().expect("a path").replace('\\', "/"))
            .collect();
        assert_eq!(paths, ["plots/a/z.MD", "plots/b.txt", "plots/c.txt"]);
        assert_eq!(run.status, 0);
    }
}

#[test]
fn a_folder_without_manuscripts_is_said_to_be_empty() {
    let s = Scratch::new();
    s.file("plots/beds.csv", "1,2");
    s.run(&["check", "plots"]).is(
        "",
        "tieout: plots: no manuscript in this folder; files ending in txt, md, qmd, rmd, html, htm, xhtml, \
         xml, nxml, docx, docm, odt, tex, pdf are looked for\n",
        2,
    );
}

#[test]
fn many_files_come_out_in_order() {
    let s = Scratch::new();
    let names: Vec<String> = (0..60).map(|i| format!("{i:02}.txt")).collect();
    for (i, name) in names.iter().enumerate() {
        // The first are the longest, so that later ones are ready before them.
        s.file(name, AGREES.repeat(1 + (60 - i) * 3));
    }
    let arguments: Vec<&str> = ["check", "--format", "ndjson", "--jobs", "8"]
        .into_iter()
        .chain(names.iter().map(String::as_str))
        .collect();
    let run = s.run(&arguments);
    let paths: Vec<_> = run.out.lines().map(|line| json(line)["path"].clone()).collect();
    assert_eq!(paths, names);
}

#[test]
fn standard_input_is_a_manuscript_too() {
    let s = Scratch::new();
    let run = s.run_with(&["check", "-", "--format", "text-only"], AGREES.as_bytes());
    run.is(AGREES, "", 0);
    let run = s.run_with(&["check", "-"], AGREES.as_bytes());
    assert!(run.out.starts_with("── standard input ──"), "{run:?}");
    assert_eq!(s.run_with(&["try", "-"], REVERSES.as_bytes()).status, 1);
    let empty = s.run(&["check", "-"]);
    assert_eq!((empty.status, empty.out.as_str()), (2, ""));
    assert!(empty.err.starts_with("tieout: standard input: "), "{empty:?}");
    s.run(&["try", " "]).is(
        "",
        "tieout: the typed text: is empty; type a statement, e.g. 't(28) = 2.20, p = .036'\n",
        2,
    );
}

#[test]
fn the_text_as_read_is_shown_to_the_byte_and_several_are_named() {
    let s = Scratch::new();
    s.file("a.txt", "Beds  were\ndug.\n")
        .file("b.txt", "χ² was not reported.\n");
    s.run(&["check", "a.txt", "--format", "text-only"])
        .is("Beds were dug.\n", "", 0);
    s.run(&["check", "a.txt", "b.txt", "--format", "text-only"]).is(
        "==> a.txt <==\nBeds were dug.\n==> b.txt <==\nχ² was not reported.\n",
        "",
        0,
    );
}

#[test]
fn places_in_json_count_characters_of_the_text_as_read() {
    let s = Scratch::new();
    s.file(
        "a.txt",
        "Größe der Beete: χ² war nicht alles.\n\nDiary keepers, t(28) = 2.20, p = .063.\n",
    );
    let text: Vec<char> = s
        .run(&["check", "a.txt", "--format", "text-only"])
        .out
        .chars()
        .collect();
    let document = json(&s.run(&["check", "a.txt", "--format", "ndjson"]).out);
    let part = |v: &serde_json::Value| {
        let at = |key: &str| v[key].as_u64().expect("a number") as usize;
        text[at("start")..at("end")].iter().collect::<String>()
    };
    let statement = &document["statements"][0];
    assert_eq!(statement["quote"], part(&statement["place"]));
    for q in statement["quantities"].as_array().expect("a list") {
        assert_eq!(q["printed"], part(q));
    }
}

#[test]
fn a_reader_that_has_seen_enough_ends_it_quietly() {
    let s = Scratch::new();
    s.file("long.txt", CONFLICTS.repeat(400));
    let mut child = s
        .command(&["check", "long.txt", "long.txt", "long.txt", "--show", "all"])
        .stdin(Stdio::null())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    let mut out = child.stdout.take().expect("piped");
    let mut first = [0; 10];
    out.read_exact(&mut first).expect("it writes something");
    drop(out);
    let done = child.wait_with_output().expect("the program ends");
    assert_eq!(String::from_utf8_lossy(&done.stderr), "");
    assert_eq!(done.status.code(), Some(1));
}

#[test]
#[cfg(target_os = "linux")]
fn a_full_disk_is_said_and_not_ignored() {
    let s = Scratch::new();
    s.file("a.txt", AGREES);
    let full = std::fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .expect("Linux has it");
    let done = s
        .command(&["check", "a.txt"])
        .stdout(full)
        .output()
        .expect("the program ends");
    assert_eq!(done.status.code(), Some(2));
    let err = String::from_utf8_lossy(&done.stderr);
    assert!(err.starts_with("tieout: the output cannot be written ("), "{err}");
}

#[test]
fn relations_are_listed_and_explained() {
    let s = Scratch::new();
    let all = s.run(&["explain"]);
    assert_eq!((all.status, all.err.as_str()), (0, ""));
    let line = all.out.lines().find(|l| l.starts_with("p-from-t "));
    assert!(
        line.is_some_and(|l| l.ends_with("p follows from t and its degrees of freedom.")),
        "{all:?}"
    );
    let one = s.run(&["explain", "p-from-t"]);
    assert!(
        one.out
            .starts_with("p-from-t\n\np follows from t and its degrees of freedom.\n\nFormula: ")
    );
    for heading in ["\nAssumes: ", "\nCaution", "\nSource: ", "\nExample: "] {
        assert!(one.out.contains(heading), "{heading}");
    }
    assert_eq!(one.status, 0);
}

#[test]
fn every_relation_has_a_line_and_a_page() {
    let s = Scratch::new();
    for relation in tieout::relations::REGISTRY {
        let run = s.run(&["explain", relation.name]);
        assert_eq!(run.status, 0, "{}", relation.name);
        assert!(run.out.lines().count() > 4, "{}", relation.name);
        assert!(!relation.summary().is_empty(), "{}", relation.name);
        let wide = run.out.lines().find(|l| l.chars().count() > 80);
        assert_eq!(wide, None, "{} fits a terminal", relation.name);
    }
}

#[test]
fn help_and_version_are_status_0() {
    let s = Scratch::new();
    let version = format!("tieout {}\n", env!("CARGO_PKG_VERSION"));
    s.run(&["--version"]).is(&version, "", 0);
    for command in ["check", "try", "explain"] {
        let run = s.run(&[command, "--help"]);
        assert_eq!((run.status, run.err.as_str()), (0, ""));
        assert!(s.run(&["--help"]).out.contains(&format!("\n  {command} ")));
    }
}
