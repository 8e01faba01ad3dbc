//! `batch` as a person meets it: the same records as `label`, failures that stop nothing, equal bytes whatever the
//! threads, the shards, the kills and the resumes. The run of a thousand files is in `batch_thousand`.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

#[path = "support/runs.rs"]
mod runs;

use runs::{Runs, killed_after, lines, orbsieve};
use serde_json::Value;
use std::io::Read;
use std::process::Stdio;

fn json(bytes: &[u8]) -> Vec<Value> {
    lines(bytes).iter().map(|line| serde_json::from_slice(line).unwrap()).collect()
}

#[test]
fn a_record_is_the_document_of_label_with_a_head() {
    let runs = Runs::new(18);
    let records = json(&runs.batch(&["runs"]).stdout);
    assert_eq!(records.len(), runs.names().len());
    for (record, name) in records.iter().zip(runs.names()) {
        assert_eq!(record["file"], name.as_str());
        let alone = orbsieve(runs.path(), &["label", &name, "--format", "json"]).output().unwrap();
        assert_eq!(record["exit_status"], alone.status.code().unwrap(), "{name}");
        assert_eq!(record["schema"], "orbsieve/1");
        assert_eq!(record["hash"].as_str().unwrap().len(), 64);
        if alone.status.success() {
            let mut document = record.clone();
            for key in ["file", "hash", "exit_status", "diagnostics"] {
                document.as_object_mut().unwrap().shift_remove(key).unwrap();
            }
            assert_eq!(document, serde_json::from_slice::<Value>(&alone.stdout).unwrap(), "{name}");
        } else {
            let told = String::from_utf8(alone.stderr).unwrap();
            assert_eq!(record["geometry"], Value::Null);
            for finding in record["diagnostics"].as_array().unwrap() {
                let drawn = format!(
                    "{name}:{}:{}: {}: {}",
                    finding["line"],
                    finding["column"],
                    finding["severity"].as_str().unwrap(),
                    finding["message"].as_str().unwrap()
                );
                assert!(told.contains(&drawn), "{drawn} is not in {told}");
            }
            let error = record["error"].as_str().unwrap();
            assert!(told.contains(error.lines().next().unwrap()) || error.ends_with("more)"), "{error} / {told}");
        }
    }
}

#[test]
fn failures_are_records_and_set_the_exit_status() {
    let runs = Runs::new(4);
    std::fs::write(runs.path().join("empty"), b"").unwrap();
    std::fs::write(runs.path().join("not-gzip"), b"\x1f\x8b nonsense").unwrap();
    let good = "runs/run-0000.molden";
    let cases: &[(&[&str], i32, &[u64])] = &[
        (&[good], 0, &[0]),
        (&["nowhere", good, "empty", "not-gzip"], 3, &[3, 0, 3, 3]),
        (&["--merge", "runs"], 3, &[]),
        (&[good, "runs/cut-short.molden", "nowhere"], 4, &[0, 4, 3]),
        (&[good, "--frame", "Co"], 3, &[2]),
    ];
    for (arguments, status, each) in cases {
        let output = runs.batch(arguments);
        let told = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(*status), "{arguments:?}: {told}");
        let statuses: Vec<u64> = json(&output.stdout).iter().map(|it| it["exit_status"].as_u64().unwrap()).collect();
        assert_eq!(statuses, *each, "{arguments:?}");
    }
    let unread = &json(&runs.batch(&["nowhere"]).stdout)[0];
    assert_eq!(unread["hash"], Value::Null);
    let told = String::from_utf8(runs.batch(&["runs", "nowhere", "empty"]).stderr).unwrap();
    assert!(told.starts_with("8 files: 4 labelled, 4 failed\nPoint groups  "), "{told}");
    assert!(told.contains("Failed        nowhere: cannot read: "), "{told}");
    assert!(runs.batch(&["runs", "--quiet"]).stderr.is_empty());
}

#[test]
fn wrong_usage_is_told_before_any_work() {
    let runs = Runs::new(1);
    let cases: &[(&[&str], &str)] = &[
        (&[], "--files-from"),
        (&["-"], "batch reads files"),
        (&["none*.molden"], "no file fits the pattern"),
        (&["elsewhere"], "no file with .molden in its name"),
        (&["runs", "--shard", "0/4"], "such as 2/4"),
        (&["runs", "--shard", "5/4"], "such as 2/4"),
        (&["runs", "--resume"], "--output"),
        (&["runs", "--group", "Q7"], "Q7"),
        (&["runs", "--rows", "sets"], "csv and parquet"),
        (&["runs", "--format", "parquet"], if cfg!(feature = "parquet") { "--output" } else { "--features parquet" }),
    ];
    std::fs::create_dir(runs.path().join("elsewhere")).unwrap();
    for (arguments, message) in cases {
        let output = runs.batch(arguments);
        let told = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(2), "{arguments:?}: {told}");
        assert!(told.contains(message), "{arguments:?}: {told}");
        assert!(output.stdout.is_empty());
    }
}

#[test]
fn names_keep_their_order_and_come_once() {
    let runs = Runs::new(12);
    let files = |arguments: &[&str]| -> Vec<String> {
        json(&runs.batch(arguments).stdout).iter().map(|it| it["file"].as_str().unwrap().to_owned()).collect()
    };
    let all = files(&["runs"]);
    assert_eq!(all, runs.names());
    assert!(all.is_sorted());
    assert_eq!(files(&["runs/*"]), all);
    assert_eq!(files(&["ru*/**/run-000[12].molden"]), ["runs/run-0001.molden", "runs/run-0002.molden"]);
    let [a, b] = ["runs/run-0001.molden", "runs/run-0000.molden"];
    assert_eq!(files(&[a, b, a]), [a, b]);
    let list = format!("# chosen\r\n\r\n  {b}\r\n{a}\n{b}");
    std::fs::write(runs.path().join("list"), &list).unwrap();
    assert_eq!(files(&["--files-from", "list"]), [b, a]);
    assert_eq!(files(&[a, "--files-from", "list"]), [a, b]);
    let mut child = orbsieve(runs.path(), &["batch", "--files-from", "-"])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()
        .unwrap();
    std::io::Write::write_all(&mut child.stdin.take().unwrap(), list.as_bytes()).unwrap();
    assert_eq!(json(&child.wait_with_output().unwrap().stdout).len(), 2);
    // A name with the signs of a pattern that is there means itself.
    std::fs::copy(runs.path().join(a), runs.path().join("run[1].molden")).unwrap();
    assert_eq!(files(&["run[1].molden"]), ["run[1].molden"]);
}

#[test]
fn bytes_do_not_depend_on_threads() {
    let runs = Runs::new(60);
    for form in [&["--format", "json"][..], &["--format", "csv"], &["--format", "csv", "--rows", "files"]] {
        let with = |threads: &str| runs.batch(&[&["runs", "nowhere", "--threads", threads], form].concat()).stdout;
        let one = with("1");
        assert!(!one.is_empty());
        for threads in ["2", "3", "7"] {
            assert!(with(threads) == one, "{threads} threads differ in {form:?}");
        }
    }
    // Fewer files than threads: each file has several.
    let benzene = |threads: &str| runs.batch(&["runs/run-0007.molden", "--threads", threads]).stdout;
    assert!(benzene("4") == benzene("1"));
}

#[test]
fn rows_say_what_the_records_say() {
    let runs = Runs::new(18);
    let records = json(&runs.batch(&["runs"]).stdout);
    for rows in ["orbitals", "sets", "files"] {
        let table = runs.batch(&["runs", "--format", "csv", "--rows", rows]).stdout;
        let mut reader = csv::Reader::from_reader(table.as_slice());
        let header = reader.headers().unwrap().clone();
        let mut table = reader.records().map(Result::unwrap);
        for record in &records {
            let one = [record.clone()];
            let entries: &[Value] = match rows {
                "files" => &one,
                _ => record[rows].as_array().map_or(&one[..], Vec::as_slice),
            };
            for entry in entries {
                let row = table.next().unwrap();
                for (name, cell) in header.iter().zip(&row) {
                    let told = match name {
                        "file" | "hash" | "exit_status" => &record[name],
                        "point_group" | "nuclear_group" | "deviation_max_angstrom" => &record["geometry"][name],
                        "title" | "formula" | "atoms" | "electrons" | "charge" if rows == "files" => {
                            &record["source"][name]
                        }
                        "functions" | "orthonormality_residual" => &record["basis"][name],
                        "determinant" => &record["frontier"][name],
                        "orbital" => &entry["index"],
                        "error" => {
                            let whole = record[name].as_str().unwrap_or_default();
                            assert_eq!(cell, whole.lines().next().unwrap_or_default());
                            continue;
                        }
                        "degeneracy" | "complete" if rows == "orbitals" => match entry["set"].as_u64() {
                            Some(set) => &record["sets"][usize::try_from(set).unwrap() - 1][name],
                            None => &Value::Null,
                        },
                        "orbitals" | "sets" | "incomplete_sets" | "purity_lowest" | "diagnostics" | "character" => {
                            continue;
                        }
                        _ if rows == "files" => continue,
                        _ => &entry[name],
                    };
                    let told = match told {
                        Value::Null => String::new(),
                        Value::String(text) => text.clone(),
                        other => other.to_string(),
                    };
                    assert_eq!(cell, told, "{name} of {rows} in {}", record["file"]);
                }
            }
        }
        assert!(table.next().is_none());
    }
}

#[test]
fn rows_of_files_tell_the_frontier() {
    let runs = Runs::new(1);
    let table = runs.batch(&["runs/run-0000.molden", "--format", "csv", "--rows", "files"]).stdout;
    let mut reader = csv::Reader::from_reader(table.as_slice());
    let header = reader.headers().unwrap().clone();
    let row = reader.records().next().unwrap().unwrap();
    let cell = |name: &str| &row[header.iter().position(|column| column == name).unwrap()];
    // Water: ten electrons fill five orbitals, the last the lone pair out of the plane (textbook, common practice).
    assert_eq!((cell("alpha_homo"), cell("orbitals"), cell("electrons")), ("1b1", "18", "10.0"));
    let number = |name: &str| cell(name).parse::<f64>().unwrap();
    let gap = number("alpha_lumo_energy_hartree") - number("alpha_homo_energy_hartree");
    assert!((gap - number("alpha_gap_hartree")).abs() < 1e-12);
    assert_eq!((cell("beta_homo"), cell("diagnostics"), cell("error")), ("", "0", ""));
}

#[test]
fn shards_in_order_are_the_whole() {
    let runs = Runs::new(13);
    let forms = [&["--format", "json"][..], &["--format", "csv"], &["--format", "csv", "--rows", "orbitals"]];
    let wholes = forms.map(|form| runs.batch(&[&["runs"], form].concat()));
    for n in [1, 2, 4, 20] {
        let names: Vec<String> = (1..=n).map(|i| format!("part-{i}.jsonl")).collect();
        let mut joined = Vec::new();
        for (i, name) in names.iter().enumerate() {
            let shard = format!("{}/{n}", i + 1);
            runs.batch(&["runs", "--shard", &shard, "--output", name]);
            joined.extend(std::fs::read(runs.path().join(name)).unwrap());
        }
        assert!(joined == wholes[0].stdout, "{n} shards joined differ");
        let names: Vec<&str> = names.iter().map(String::as_str).collect();
        for (form, whole) in forms.iter().zip(&wholes) {
            let merged = runs.batch(&[&["--merge"], &names[..], form].concat());
            assert!(merged.stdout == whole.stdout, "{n} shards merged differ in {form:?}");
            assert_eq!((merged.status.code(), &merged.stderr), (whole.status.code(), &whole.stderr));
            let to_file = runs.batch(&[&["--merge"], &names[..], form, &["--output", "merged"]].concat());
            assert_eq!(to_file.status.code(), whole.status.code());
            assert!(std::fs::read(runs.path().join("merged")).unwrap() == whole.stdout);
        }
    }
}

#[test]
fn a_merge_of_what_is_no_result_writes_nothing() {
    let runs = Runs::new(3);
    let whole = runs.batch(&["runs"]).stdout;
    std::fs::write(runs.path().join("good"), &whole).unwrap();
    std::fs::write(runs.path().join("torn"), &whole[..whole.len() - 9]).unwrap();
    std::fs::write(runs.path().join("other"), b"{\"a\": 1}\n").unwrap();
    std::fs::write(runs.path().join("merged"), b"as it was").unwrap();
    for (arguments, message) in [
        (["good", "torn"], "a second record of"),
        (["torn", "good"], "breaks off"),
        (["other", "good"], "other:1: no record"),
        (["good", "nowhere"], "cannot read nowhere"),
    ] {
        let output = runs.batch(&[&["--merge", "--output", "merged"], &arguments[..]].concat());
        let told = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(3), "{told}");
        assert!(told.contains(message), "{told}");
        assert_eq!(std::fs::read(runs.path().join("merged")).unwrap(), b"as it was");
    }
}

/// Forms that a run can be resumed in, with their options.
fn forms() -> Vec<&'static [&'static str]> {
    let mut forms: Vec<&[&str]> =
        vec![&["--format", "json"], &["--format", "csv"], &["--format", "csv", "--rows", "files"]];
    if cfg!(feature = "parquet") {
        forms.push(&["--format", "parquet"]);
    }
    forms
}

#[test]
fn a_run_torn_at_any_byte_is_resumed_to_the_same_bytes() {
    let runs = Runs::new(9);
    let lines_of_records = runs.batch(&["runs"]).stdout;
    for form in forms() {
        let unbroken = runs.to_file("unbroken", &[&["runs"], form].concat());
        let size = lines_of_records.len();
        let first = lines_of_records.iter().position(|byte| *byte == b'\n').unwrap() + 1;
        for torn in [0, 1, first - 1, first, first + 1, size / 3, size / 2, size - 1, size] {
            std::fs::write(runs.path().join("again.part"), &lines_of_records[..torn]).unwrap();
            let again = runs.to_file("again", &[&["runs", "--resume"], form].concat());
            assert!(again == unbroken, "torn at {torn} of {size} in {form:?}");
            assert!(!runs.path().join("again.part").exists());
            std::fs::remove_file(runs.path().join("again")).unwrap();
        }
        // Damage within: what is no record is made again.
        let mut damaged = lines_of_records.clone();
        damaged[first / 2] = 0;
        damaged[size / 2] = b'\n';
        std::fs::write(runs.path().join("again.part"), &damaged).unwrap();
        assert!(runs.to_file("again", &[&["runs", "--resume"], form].concat()) == unbroken, "damaged, {form:?}");
        std::fs::remove_file(runs.path().join("again")).unwrap();
    }
}

#[test]
fn a_killed_run_is_resumed_to_the_same_bytes() {
    let runs = Runs::new(60);
    for form in forms() {
        let unbroken = runs.to_file("unbroken", &[&["runs"], form].concat());
        let arguments = [&["batch", "runs", "--threads", "2", "--output", "killed", "--resume"], form].concat();
        let mut halfway = 0;
        for records in [1, 5, 20, 40] {
            // Each kill hits the resumed run of the one before.
            let left = killed_after(orbsieve(runs.path(), &arguments), &runs.path().join("killed.part"), records);
            halfway += usize::from(left.is_some_and(|left| left < runs.names().len()));
        }
        assert!(halfway >= 2, "hardly a kill came in time in {form:?}");
        assert!(!runs.path().join("killed").exists(), "an output that is not whole in {form:?}");
        let resumed = runs.batch(&arguments[1..]);
        let told = String::from_utf8(resumed.stderr).unwrap();
        assert!(told.contains("records kept from an earlier run"), "{told}");
        assert!(std::fs::read(runs.path().join("killed")).unwrap() == unbroken, "{form:?}");
        std::fs::remove_file(runs.path().join("killed")).unwrap();
    }
}

/// Resumes into `out`, holds it against a fresh run, and gives how many records were kept.
fn kept(runs: &Runs, form: &[&str], arguments: &[&str]) -> usize {
    let output = runs.batch(&[arguments, form, &["--resume", "--output", "out"]].concat());
    let told = String::from_utf8(output.stderr).unwrap();
    let fresh = runs.to_file("fresh", &[arguments, form].concat());
    std::fs::remove_file(runs.path().join("fresh")).unwrap();
    assert!(std::fs::read(runs.path().join("out")).unwrap() == fresh, "{arguments:?} {form:?}: {told}");
    assert_eq!(std::fs::read_dir(runs.path()).unwrap().count(), 2, "something is left beside the output");
    let at = told.find("; ").map(|at| at + 2);
    at.map_or(0, |at| told[at..].split(' ').next().unwrap().parse::<usize>().unwrap())
}

#[test]
fn a_resume_follows_what_has_changed() {
    for form in forms().into_iter().filter(|form| !form.contains(&"parquet")) {
        let runs = Runs::new(9);
        let kept = |arguments: &[&str]| kept(&runs, form, arguments);
        let all = runs.names().len();
        assert_eq!(kept(&["runs"]), 0);
        assert_eq!(kept(&["runs"]), all);
        // A file changed, one gone, one new in the middle, one that cannot be read and is tried each time.
        runs.write(3, "another title");
        assert_eq!(kept(&["runs"]), all - 1);
        std::fs::remove_file(runs.path().join("runs/run-0005.molden")).unwrap();
        assert_eq!(kept(&["runs"]), all - 1);
        std::fs::copy(runs.path().join("runs/run-0001.molden"), runs.path().join("runs/run-0001b.molden")).unwrap();
        assert_eq!(kept(&["runs", "nowhere"]), all - 1);
        assert_eq!(kept(&["runs", "nowhere"]), all);
        // Another order, fewer files, other settings.
        assert_eq!(kept(&["runs/run-0002.molden", "runs"]), all);
        assert_eq!(kept(&["runs/run-0002.molden"]), 1);
        assert_eq!(kept(&["runs/run-0002.molden", "--tolerance", "0.02"]), 0);
        assert_eq!(kept(&["runs/run-0002.molden", "--tolerance", "0.02", "--group", "Cs"]), 0);
        // An output of another form gives nothing and is replaced.
        std::fs::write(runs.path().join("out"), b"file,hash\nnot \"this\" table\n\xff,{}\n").unwrap();
        assert_eq!(kept(&["runs/run-0002.molden"]), 0);
    }
}

#[cfg(feature = "parquet")]
#[test]
fn a_finished_parquet_is_current_or_made_anew() {
    for rows in ["orbitals", "files"] {
        let runs = Runs::new(9);
        let kept = |arguments: &[&str]| kept(&runs, &["--format", "parquet", "--rows", rows], arguments);
        let all = runs.names().len();
        assert_eq!(kept(&["runs"]), 0);
        assert_eq!(kept(&["runs"]), all);
        runs.write(3, "another title");
        assert_eq!(kept(&["runs"]), 0);
        assert_eq!(kept(&["runs", "--purity", "0.95"]), 0);
        assert_eq!(kept(&["runs/run-0003.molden"]), 0);
        assert_eq!(kept(&["runs/run-0003.molden"]), 1);
    }
}

#[test]
fn a_journal_is_neither_lost_nor_shared() {
    let runs = Runs::new(5);
    let part = runs.path().join("out.part");
    std::fs::write(&part, b"{}\n").unwrap();
    let output = runs.batch(&["runs", "--output", "out"]);
    let told = String::from_utf8(output.stderr).unwrap();
    assert_eq!((output.status.code(), told.contains("--resume")), (Some(2), true), "{told}");
    assert_eq!(std::fs::read(&part).unwrap(), b"{}\n");
    let held = std::fs::File::open(&part).unwrap();
    held.lock().unwrap();
    let output = runs.batch(&["runs", "--output", "out", "--resume"]);
    let told = String::from_utf8(output.stderr).unwrap();
    assert_eq!((output.status.code(), told.contains("another run")), (Some(2), true), "{told}");
    drop(held);
    assert_eq!(runs.batch(&["runs", "--output", "no/such/out"]).status.code(), Some(3));
    assert_eq!(runs.batch(&["runs", "--output", "runs"]).status.code(), Some(3));
}

#[test]
fn a_reader_that_leaves_early_hears_no_complaint() {
    let runs = Runs::new(40);
    let mut child = orbsieve(runs.path(), &["batch", "runs", "--quiet"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut start = [0; 10];
    child.stdout.take().unwrap().read_exact(&mut start).unwrap();
    let output = child.wait_with_output().unwrap();
    assert_eq!((output.status.code(), output.stderr.as_slice()), (Some(0), &b""[..]));
    assert!(runs.batch(&["runs", "--quiet", "--output", "/dev/null"]).status.code().is_some());
}

#[cfg(feature = "parquet")]
#[test]
fn parquet_says_what_json_says() {
    use parquet::file::reader::{FileReader, SerializedFileReader};
    use parquet::record::Field;
    let runs = Runs::new(18);
    let records = json(&runs.batch(&["runs"]).stdout);
    for rows in ["orbitals", "sets", "files"] {
        runs.to_file("out.parquet", &["runs", "--format", "parquet", "--rows", rows]);
        let csv = runs.batch(&["runs", "--format", "csv", "--rows", rows]).stdout;
        let file = std::fs::File::open(runs.path().join("out.parquet")).unwrap();
        let reader = SerializedFileReader::new(file).unwrap();
        let read: Vec<_> = reader.get_row_iter(None).unwrap().map(Result::unwrap).collect();
        let mut table = csv::Reader::from_reader(csv.as_slice());
        let names = table.headers().unwrap().clone();
        let told: Vec<_> = table.records().map(Result::unwrap).collect();
        assert_eq!(read.len(), told.len());
        for (row, told) in read.iter().zip(&told) {
            let columns: Vec<_> = row.get_column_iter().collect();
            assert_eq!(columns.len(), told.len());
            for (((name, field), cell), header) in columns.into_iter().zip(told).zip(&names) {
                assert_eq!(name, header);
                let same = match field {
                    Field::Null => cell.is_empty(),
                    Field::Str(text) => text == cell,
                    Field::Long(number) => number.to_string() == cell,
                    Field::Double(number) => format!("{number:?}") == cell,
                    Field::Bool(flag) => flag.to_string() == cell,
                    other => panic!("{name} holds {other:?}"),
                };
                assert!(same, "{name} of {rows}: {field:?} is not {cell}");
            }
        }
        std::fs::remove_file(runs.path().join("out.parquet")).unwrap();
        if rows == "orbitals" {
            // Straight from the records: every orbital in order, one row for a file without any.
            let mut next = read.iter();
            for record in &records {
                let empty = vec![Value::Null];
                for orbital in record["orbitals"].as_array().unwrap_or(&empty) {
                    let fields: Vec<_> =
                        next.next().unwrap().get_column_iter().map(|(_, field)| field.clone()).collect();
                    let number = |value: &Value| value.as_f64().map_or(Field::Null, Field::Double);
                    let text = |value: &Value| value.as_str().map_or(Field::Null, |text| Field::Str(text.to_owned()));
                    assert_eq!(fields[0], text(&record["file"]));
                    assert_eq!(fields[3], text(&record["geometry"]["point_group"]));
                    assert_eq!(fields[6], number(&orbital["energy_hartree"]));
                    assert_eq!(fields[7], number(&orbital["occupation"]));
                    assert_eq!(fields[8], text(&orbital["irrep"]));
                    assert_eq!(fields[9], text(&orbital["label"]));
                    assert_eq!(fields[11], number(&orbital["purity"]));
                }
            }
            assert!(next.next().is_none());
        }
    }
}
