//! The HTML report as text: everything is there with scripting off, nothing is fetched, nothing in a file becomes markup.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use base64::Engine as _;
use std::io::Write as _;
use std::path::Path;
use std::process::{Command, Output};

fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap()
}

fn page(path: &str, more: &[&str]) -> String {
    let output = run(&[&["label", path, "--format", "html"], more].concat());
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

/// The page without the pictures' bytes, for searching in words.
fn without_pictures(page: &str) -> String {
    let mut parts = page.split("data:image/png;base64,");
    let mut text = parts.next().unwrap().to_owned();
    for part in parts {
        text.push_str(part.split_once('"').unwrap().1);
    }
    text
}

fn part<'a>(page: &'a str, from: &str, to: &str) -> &'a str {
    let (_, rest) = page.split_once(from).unwrap_or_else(|| panic!("no {from}"));
    rest.split_once(to).unwrap_or_else(|| panic!("no {to}")).0
}

#[test]
fn all_rows_stand_in_the_file_itself_and_nothing_is_fetched() {
    let path = "tests/molecules/benzene_631g.molden";
    let page = page(path, &[]);
    let document: serde_json::Value =
        serde_json::from_slice(&run(&["label", path, "--format", "json"]).stdout).unwrap();
    let count = |key: &str| document[key].as_array().unwrap().len();
    let rows = |id: &str| {
        part(part(&page, &format!("id=\"{id}\""), "</section>"), "<tbody>", "</tbody>").matches("<tr").count()
    };
    assert_eq!(rows("sets"), count("sets"));
    assert_eq!(rows("table-orbitals"), count("orbitals"));
    assert_eq!(rows("transitions"), count("transitions"));
    assert_eq!(
        page.matches("hidden").count(),
        page.matches("row.hidden").count() + page.matches("aria-hidden").count(),
        "no row is hidden"
    );
    let text = without_pictures(&page).replace("http://www.w3.org/2000/svg", "");
    for address in
        ["http:", "https:", "//www", "url(", "@import", "src=\"/", "<link", "<iframe", "<base", "javascript:"]
    {
        assert!(!text.contains(address), "{address}");
    }
    assert!(text.contains("default-src 'none'"), "a policy that allows no address");
    // What a style attribute says would be against the policy.
    assert!(!text.contains(" style=\"") && !text.contains(" onclick"));
}

#[test]
fn the_answer_stands_before_its_evidence() {
    let page = without_pictures(&page("tests/molecules/scenario/lantern-3.molden", &["--pictures", "1,1"]));
    let place = |text: &str| page.find(text).unwrap_or_else(|| panic!("no {text}"));
    let order = ["id=\"answer\"", "id=\"orbitals\"", "id=\"symmetry\"", "id=\"sets\"", "id=\"audit\"", "id=\"method\""];
    assert!(order.windows(2).all(|pair| place(pair[0]) < place(pair[1])));
    let answer = part(&page, "id=\"answer\"", "</section>");
    for said in [
        "<i>O</i><sub>h</sub>",
        "2<i>t</i><sub>2g</sub>",
        "6<i>e</i><sub>g</sub>",
        "7.731 eV",
        "<i>A</i><sub>1g</sub>",
        "not a band energy",
        "rotated",
    ] {
        assert!(answer.contains(said), "{said} in {answer}");
    }
    let method = part(&page, "id=\"method\"", "</section>");
    for said in [
        env!("CARGO_PKG_VERSION"),
        "0.01 Å",
        "coefficients of normalised primitives",
        "80 % of the density",
        "not an intensity",
        "azimuth 25°",
    ] {
        assert!(method.contains(said), "{said} in {method}");
    }
    assert!(part(&page, "id=\"orbitals\"", "</section>").contains("combinations of orbitals 52–54"));
    let characters = part(part(&page, "class=\"characters\"", "</table>"), "<tbody>", "</tbody>");
    assert_eq!(characters.matches("<tr").count(), 10, "Oh has ten irreps");
}

#[test]
fn what_a_file_says_never_becomes_markup() {
    let text =
        std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules/water_631gs.molden"))
            .unwrap();
    let hostile =
        "</title></style></script><script>alert(1)</script><img src=x onerror=alert(2)> \"quoted\" 'single' &amp;";
    // The line under the head is the title.
    let text = text.replacen("made by pyscf v[2.14.0]", hostile, 1);
    assert!(text.contains(hostile));
    let folder = tempfile::Builder::new().prefix("<b>&\"").tempdir().unwrap();
    let path = folder.path().join("<i>water.molden");
    std::fs::File::create(&path).unwrap().write_all(text.as_bytes()).unwrap();
    let page = page(path.to_str().unwrap(), &["--pictures", "1,0"]);
    assert_eq!(page.matches("<script").count(), 1, "only the page's own");
    assert_eq!(page.matches("</script>").count(), 1);
    assert!(!page.contains("<img src=x") && !page.contains("<b>&") && !page.contains("<i>water"));
    assert!(page.contains("&lt;script&gt;alert(1)&lt;/script&gt;"), "it is shown as text");
}

#[test]
fn as_many_orbitals_are_drawn_as_asked_for() {
    let path = "tests/molecules/water_631gs.molden";
    for (asked, drawn) in [("0,0", 0), ("1,0", 1), ("2,1", 3), ("99,99", 18)] {
        let page = page(path, &["--pictures", asked]);
        assert_eq!(page.matches("data:image/png;base64,").count(), drawn, "{asked}");
        for picture in page.split("data:image/png;base64,").skip(1) {
            let bytes = base64::engine::general_purpose::STANDARD.decode(picture.split_once('"').unwrap().0).unwrap();
            assert!(bytes.starts_with(b"\x89PNG"));
        }
    }
}

#[test]
fn the_same_file_gives_the_same_page_on_any_number_of_threads() {
    let path = "tests/molecules/turned_ammonia.molden";
    assert_eq!(page(path, &["--threads", "1"]), page(path, &["--threads", "3"]));
}

#[test]
fn files_without_occupations_or_with_one_atom_have_a_page() {
    for path in [
        "tests/molecules/neon_def2tzvp.molden",
        "tests/molecules/carbon_dioxide_631gs.molden",
        "tests/molecules/water_sto3g.molden",
    ] {
        let page = page(path, &["--pictures", "1,1"]);
        assert!(page.contains("id=\"sets\"") && page.ends_with("</html>"));
    }
}

#[test]
fn other_verbs_say_that_they_have_no_page() {
    for arguments in [
        &["audit", "tests/molecules/water_631gs.molden"][..],
        &["table", "Oh"],
        &["geometry", "tests/molecules/water_631gs.molden"],
    ] {
        let output = run(&[arguments, &["--format", "html"]].concat());
        assert_eq!(output.status.code(), Some(2));
        assert!(String::from_utf8_lossy(&output.stderr).contains("not html"));
        assert!(output.stdout.is_empty());
    }
}
