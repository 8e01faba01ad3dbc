//! `--format latex` and `--format md`: tables that a paper can take over.
//!
//! Judge: structure. Every row has as many cells as there are columns, braces and dollars are balanced, a title full of special
//! signs survives as text; where pdflatex is installed, it sets the table.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use std::process::{Command, Output};

fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap()
}

fn printed(arguments: &str, format: &str) -> String {
    let words: Vec<&str> = arguments.split_whitespace().chain(["--format", format]).collect();
    let output = run(&words);
    assert!(output.status.success(), "{words:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

const RUNS: [&str; 17] = [
    "label tests/molecules/scenario/lantern-3.molden",
    "label tests/molecules/scenario/bellows-5.molden --all",
    "label tests/molecules/oxygen_triplet_631gs.molden",
    "label tests/molecules/localised_methane_boys.molden",
    "label tests/molecules/neon_def2tzvp.molden",
    "transitions tests/molecules/formaldehyde_631gs.molden",
    "transitions tests/molecules/oxygen_triplet_631gs.molden --window 2,2",
    "transitions tests/molecules/mixed_ethene.molden",
    "table D5d",
    "table Dinfh",
    "table C4",
    "table Ih",
    "states Oh t2g^3,eg^1",
    "states Dinfh pi_g^2 --to pi_g^1,sigma_u^1",
    "modes tests/molecules/openmolcas_modes_ammonia.molden",
    "modes tests/molecules/psi4_modes_benzene.molden",
    "modes tests/molecules/xyz/octahedron_shaken.xyz",
];

/// Signs that count, with escaped ones taken out.
fn bare(text: &str) -> String {
    let mut bare = String::new();
    let mut signs = text.chars();
    while let Some(sign) = signs.next() {
        if sign == '\\' {
            // A control word stays, an escaped sign goes.
            let rest = signs.as_str();
            if !rest.starts_with(|c: char| c.is_ascii_alphabetic()) {
                signs.next();
            }
        } else {
            bare.push(sign);
        }
    }
    bare
}

fn check_latex(what: &str, text: &str) {
    assert!(text.is_ascii(), "{what}: {:?}", text.chars().find(|c| !c.is_ascii()));
    let all = bare(text);
    let mut depth = 0_i32;
    for sign in all.chars() {
        depth += i32::from(sign == '{') - i32::from(sign == '}');
        assert!(depth >= 0, "{what}: a brace closes what none opened");
    }
    assert_eq!(depth, 0, "{what}");
    for line in text.lines() {
        assert!(bare(line).matches('$').count().is_multiple_of(2), "{what}: {line}");
    }
    assert_eq!(text.matches(r"\begin{table}").count(), text.matches(r"\end{table}").count());
    for part in text.split(r"\begin{tabular}{").skip(1) {
        let (kinds, rest) = part.split_once('}').unwrap();
        let (rows, _) = rest.split_once(r"\end{tabular}").unwrap();
        let rows: Vec<&str> = rows.lines().filter(|line| !line.is_empty() && *line != r"\hline").collect();
        assert!(rows.len() > 1, "{what}");
        for row in rows {
            assert!(row.ends_with(r" \\"), "{what}: {row}");
            assert_eq!(bare(row).matches('&').count() + 1, kinds.len(), "{what}: {row}");
        }
    }
}

fn check_markdown(what: &str, text: &str) {
    let lines: Vec<&str> = text.lines().collect();
    let mut tables = 0;
    for at in 1..lines.len() {
        let ruled = lines[at].starts_with("| :--") || lines[at].starts_with("| --");
        if !ruled {
            continue;
        }
        tables += 1;
        let bars = |line: &str| line.replace(r"\|", "").matches('|').count();
        let wanted = bars(lines[at]);
        assert_eq!(bars(lines[at - 1]), wanted, "{what}: {}", lines[at - 1]);
        for row in lines[at + 1..].iter().take_while(|line| line.starts_with('|')) {
            assert_eq!(bars(row), wanted, "{what}: {row}");
        }
    }
    assert!(tables > 0, "{what}");
    for tag in ["sub", "sup"] {
        assert_eq!(text.matches(&format!("<{tag}>")).count(), text.matches(&format!("</{tag}>")).count(), "{what}");
    }
}

#[test]
fn tables_are_whole() {
    for arguments in RUNS {
        check_latex(arguments, &printed(arguments, "latex"));
        check_markdown(arguments, &printed(arguments, "md"));
    }
}

#[test]
fn symbols_and_notes_are_there() {
    let label = printed("label tests/molecules/scenario/lantern-3.molden", "latex");
    for text in [r"$2t_{2\mathrm{g}}$ & HOMO", r"$O_{\mathrm{h}}$", r"tolerance 0.01 \AA{}", "no band energies"] {
        assert!(label.contains(text), "{text}\n{label}");
    }
    let transitions = printed("transitions tests/molecules/formaldehyde_631gs.molden", "latex");
    for text in [r"$2b_{2}$ $\to$ $2b_{1}$", "$A_{2}$", "a label is not an intensity"] {
        assert!(transitions.contains(text), "{text}\n{transitions}");
    }
    let states = printed("states Oh t2g^3,eg^1", "latex");
    assert!(states.contains(r"${}^{5}E_{\mathrm{g}}$") && states.contains(r"$(t_{2\mathrm{g}})^{3}$"), "{states}");
    let table = printed("table D5d", "md");
    assert!(table.contains("2*S*<sub>10</sub><sup>3</sup>") && table.contains("*E*<sub>1g</sub>"), "{table}");
}

/// Cells say what the JSON output says: labels and energies of every set, in order.
#[test]
fn rows_are_those_of_the_document() {
    let file = "label tests/molecules/scenario/lantern-3.molden --all";
    let document: serde_json::Value = serde_json::from_str(&printed(file, "json")).unwrap();
    let table = printed(file, "md");
    let rows: Vec<Vec<&str>> = table
        .lines()
        .filter(|line| line.starts_with("| ") && !line.contains(":--") && !line.contains("Energy/eV"))
        .map(|line| line.trim_matches('|').split(" | ").map(str::trim).collect())
        .collect();
    let sets = document["sets"].as_array().unwrap();
    assert_eq!(rows.len(), sets.len());
    for (row, set) in rows.iter().zip(sets) {
        let plain = row[0].replace('*', "").replace("<sub>", "").replace("</sub>", "");
        assert_eq!(plain, set["label"].as_str().unwrap());
        let shown: f64 = row[2].replace('−', "-").parse().unwrap();
        // Hartree in eV, CODATA 2018.
        assert!((shown - set["energy_hartree"].as_f64().unwrap() * 27.211_386_245_988).abs() < 6e-4);
    }
}

#[test]
fn a_title_full_of_signs_survives() {
    let scratch = tempfile::tempdir().unwrap();
    let path = scratch.path().join("signs.molden");
    let water = std::fs::read_to_string(
        std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules/water_631gs.molden"),
    )
    .unwrap();
    let title = r"50% & {x} $y_1^2 | <b> \cmd ~ # `z` *w* [v]";
    let (head, rest) = water.split_once("[Title]").unwrap_or((&water, ""));
    let changed = if rest.is_empty() {
        water.replacen("[Molden Format]", &format!("[Molden Format]\n[Title]\n{title}\n"), 1)
    } else {
        let after = rest.find("\n[").unwrap();
        format!("{head}[Title]\n{title}{}", &rest[after..])
    };
    std::fs::write(&path, changed).unwrap();
    let arguments = format!("label {}", path.display());
    let latex = printed(&arguments, "latex");
    check_latex("title", &latex);
    assert!(
        latex.contains(r"50\% \& \{x\} \$y\_1\textasciicircum{}2 $|$ $<$b$>$ \textbackslash{}cmd \textasciitilde{} \#"),
        "{latex}"
    );
    let markdown = printed(&arguments, "md");
    check_markdown("title", &markdown);
    assert!(markdown.contains(r"50% &amp; {x} \$y\_1^2 \| &lt;b&gt; \\cmd \~ \# \`z\` \*w\* \[v\]"), "{markdown}");
}

#[test]
fn pdflatex_sets_the_tables_where_it_is_installed() {
    if Command::new("pdflatex").arg("--version").output().is_err() {
        return;
    }
    let scratch = tempfile::tempdir().unwrap();
    let tables: String =
        RUNS.iter().map(|arguments| printed(arguments, "latex")).collect::<Vec<_>>().join("\\clearpage\n");
    let text = format!("\\documentclass{{article}}\\begin{{document}}\n{tables}\\end{{document}}\n");
    std::fs::write(scratch.path().join("tables.tex"), text).unwrap();
    let output = Command::new("pdflatex")
        .args(["-interaction=nonstopmode", "-halt-on-error", "tables.tex"])
        .current_dir(scratch.path())
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stdout));
}

#[test]
fn verbs_without_tables_say_what_they_print() {
    let water = "tests/molecules/water_631gs.molden";
    let refused: &[(&[&str], &str)] = &[
        (&["geometry", water], "geometry prints text or json"),
        (&["audit", water], "audit prints text or json"),
        (&["purify", water], "the report of purify prints text or json"),
        (&["table", "O", "--double"], "table --double prints text or json"),
        (&["table", "Oh", "--transition", "t2g", "eg"], "table --transition prints text or json"),
        (&["label", water, "--explain", "homo"], "an explanation prints text or json"),
        (&["states", "O", "--level", "5/2"], "there is none here"),
    ];
    for (arguments, message) in refused {
        for format in ["latex", "md"] {
            let output = run(&[*arguments, &["--format", format]].concat());
            let errors = String::from_utf8(output.stderr).unwrap();
            assert_eq!(output.status.code(), Some(2), "{arguments:?}: {errors}");
            assert!(errors.contains(message) && output.stdout.is_empty(), "{arguments:?}: {errors}");
        }
    }
}
