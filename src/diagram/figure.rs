//! The whole figure: axis, columns with their titles, lines between them, notes.
//!
//! Here: sizes and places of the parts. Not here: marks inside a column (`diagram::column`).

use super::axis::Scale;
use super::column::{PITCH, Sketch, spin_name};
use super::correlation::{self, Link, Parts};
use super::ink::{self, Anchor, Line, NOTE, TEXT, n};
use super::level::{self, Column, is_unrestricted};
use super::notes::{self, wrap};
use super::palette::{ALL, DASHES, INK, LINES, QUIET};
use super::symbol::{self, Run, Style, words};
use super::window::window;
use super::{DiagramError, Drawn, Options, Width, Zero};
use crate::model::Spin;
use crate::report::document::Document;
use svg::Node;
use svg::node::Blob;
use svg::node::element::{Description, Element, Group, Title};

/// Points a millimetre.
const POINTS: f64 = 72.0 / 25.4;
/// Axis with its numbers and words.
const AXIS: f64 = 38.0;
/// Right margin.
const MARGIN: f64 = 6.0;
/// Least room for lines between columns.
const BETWEEN: f64 = 26.0;
/// Shortest and usual longest axis, points.
const HEIGHT: (f64, f64) = (200.0, 520.0);
/// Line of notes.
const NOTE_PITCH: f64 = 7.6;

/// Draws documents side by side; one has no lines.
///
/// # Errors
/// [`DiagramError`].
pub fn draw(documents: &[Document], options: &Options) -> Result<Drawn, DiagramError> {
    let mut columns = columns(documents);
    check(documents, &columns, options)?;
    if options.zero == Zero::Homo {
        shift_to_homo(documents, &mut columns);
    }
    let Some(energies) = window(&columns, options.range) else {
        return Err(DiagramError::NoLevels {
            file: documents.first().map(|d| d.source.file.clone()).unwrap_or_default(),
        });
    };
    let figure = Figure::new(documents, &columns, options, energies);
    Ok(figure.draw())
}

fn columns(documents: &[Document]) -> Vec<Column> {
    let spins: &[Option<Spin>] =
        if documents.iter().any(is_unrestricted) { &[Some(Spin::Alpha), Some(Spin::Beta)] } else { &[None] };
    let of_spin = |&spin: &Option<Spin>| {
        documents.iter().enumerate().map(move |(file, document)| level::column(document, file, spin))
    };
    spins.iter().flat_map(of_spin).collect()
}

fn check(documents: &[Document], columns: &[Column], options: &Options) -> Result<(), DiagramError> {
    for (file, document) in documents.iter().enumerate() {
        if columns.iter().filter(|column| column.file == file).all(|column| column.levels.is_empty()) {
            return Err(DiagramError::NoLevels { file: document.source.file.clone() });
        }
    }
    if !options.names.is_empty() && options.names.len() != documents.len() {
        return Err(DiagramError::Names { names: options.names.len(), files: documents.len() });
    }
    match options.range {
        Some((low, high)) if !(low < high) => Err(DiagramError::Range { low, high }),
        _ => Ok(()),
    }
}

fn shift_to_homo(documents: &[Document], columns: &mut [Column]) {
    for file in 0..documents.len() {
        let of_file = || columns.iter().filter(|column| column.file == file);
        let highest = of_file().filter_map(Column::highest_occupied_ev).reduce(f64::max);
        let Some(zero) = highest else { continue };
        for column in columns.iter_mut().filter(|column| column.file == file) {
            column.levels.iter_mut().for_each(|level| level.energy_ev -= zero);
        }
    }
}

/// Everything that is settled before marks are drawn.
struct Figure<'a> {
    documents: &'a [Document],
    options: &'a Options,
    scale: Scale,
    sketches: Vec<Sketch<'a>>,
    /// Middle of the bars of each column.
    middles: Vec<f64>,
    /// For each column the links to the next of the same spin.
    links: Vec<Vec<Link>>,
    width: f64,
    top: f64,
    notes: Vec<String>,
    cautions: Vec<String>,
}

impl<'a> Figure<'a> {
    fn new(documents: &'a [Document], columns: &'a [Column], options: &'a Options, energies: (f64, f64)) -> Self {
        let inside = |column: &Column| {
            column.levels.iter().filter(|level| (energies.0..=energies.1).contains(&level.energy_ev)).count()
        };
        let most = columns.iter().map(inside).max().unwrap_or(0) as f64;
        // Room for every label, and some air while the page allows it.
        let height = (1.5 * most * PITCH).clamp(HEIGHT.0, HEIGHT.1).max((most + 1.0) * PITCH);
        let asked = options.width.unwrap_or(if columns.len() <= 2 { Width::Single } else { Width::Double });
        let title_lines = if documents.len() > 1 { 3.0 } else { 2.0 };
        let spins = if columns.iter().any(|column| column.spin.is_some()) { 1.0 } else { 0.0 };
        let top = 8.0 + 10.0 * (title_lines + spins);
        let scale = Scale { low: energies.0, high: energies.1, top, bottom: top + height };

        let mut width = asked.mm() * POINTS;
        let share = (width - AXIS - MARGIN) / columns.len() as f64;
        let mut sketches: Vec<Sketch<'a>> =
            columns.iter().map(|column| Sketch::new(column, &scale, (0.45 * share).clamp(36.0, 140.0))).collect();
        for sketch in &mut sketches {
            notes::decorate(sketch, documents, options, &scale);
        }
        let between = if documents.len() > 1 { BETWEEN } else { 8.0 };
        let needed = sketches.iter().map(|sketch| sketch.extent().0 + sketch.extent().1 + between).fold(0.0, f64::max);
        let share = share.max(needed);
        width = width.max(AXIS + MARGIN + share * columns.len() as f64);
        let middle = |(at, sketch): (usize, &Sketch<'_>)| {
            let (left, right) = sketch.extent();
            AXIS + share * (at as f64 + 0.5) + (left - right) / 2.0
        };
        let middles = sketches.iter().enumerate().map(middle).collect();

        let mut cautions = Vec::new();
        let links = links(documents, columns, options, &mut cautions);
        let notes = notes::notes(documents, &sketches, options, energies, &cautions, width > asked.mm() * POINTS + 0.5);
        Self { documents, options, scale, sketches, middles, links, width, top, notes, cautions }
    }

    fn draw(self) -> Drawn {
        let id = if self.options.id.is_empty() { "levels" } else { self.options.id.as_str() };
        let lines: Vec<String> =
            self.notes.iter().flat_map(|note| wrap(note, NOTE, self.width - MARGIN - 8.0)).collect();
        let height = self.scale.bottom + 14.0 + NOTE_PITCH * lines.len() as f64;
        let (name, story) = (self.name(), self.story());
        let mut root = Element::new("svg");
        let mut set = |name: &str, value: String| root.assign(name, value);
        set("xmlns", "http://www.w3.org/2000/svg".to_owned());
        set("id", id.to_owned());
        set("class", "orbsieve-levels".to_owned());
        set("role", "img".to_owned());
        set("aria-labelledby", format!("{id}-title {id}-desc"));
        set("width", format!("{}mm", n(self.width / POINTS)));
        set("height", format!("{}mm", n(height / POINTS)));
        set("viewBox", format!("0 0 {} {}", n(self.width), n(height)));
        set("font-family", "Arial, Helvetica, \"Liberation Sans\", sans-serif".to_owned());
        root.append(Title::new(ink::printable(&name)).set("id", format!("{id}-title")));
        root.append(
            Description::new().set("id", format!("{id}-desc")).add(svg::node::Text::new(ink::printable(&story))),
        );
        root.append(Blob::new(style(id)));
        let mut paper = Element::new("rect");
        for (name, value) in [("class", "paper fill"), ("width", "100%"), ("height", "100%"), ("fill", "#ffffff")] {
            paper.assign(name, value);
        }
        root.append(paper);
        root.append(self.draw_axis());
        root.append(self.draw_links());
        for (sketch, &middle) in self.sketches.iter().zip(&self.middles) {
            root.append(sketch.draw(middle));
        }
        root.append(self.draw_titles());
        let mut notes = ink::group("notes");
        for (at, line) in lines.iter().enumerate() {
            let runs = words(line);
            let y = self.scale.bottom + 16.0 + NOTE_PITCH * at as f64;
            notes = notes.add(ink::text(&Line { size: NOTE, colour: QUIET, ..Line::at(8.0, y, &runs) }));
        }
        root.append(notes);
        Drawn { svg: format!("{root}\n"), cautions: self.cautions }
    }

    fn name(&self) -> String {
        let names: Vec<String> = (0..self.documents.len()).map(|file| self.title_of(file)).collect();
        format!("Orbital energy levels of {}", names.join(", "))
    }

    /// The levels in words, for people who listen.
    fn story(&self) -> String {
        let column = |sketch: &Sketch<'_>| {
            let file = sketch.column.file;
            let spin = sketch.column.spin.map_or(String::new(), |spin| format!(" ({})", spin_name(spin)));
            let levels = sketch.shown.iter().map(|shown| {
                let electrons = shown
                    .level
                    .electrons()
                    .map_or(String::new(), |e| format!(", {} electrons", level::electrons_text(e)));
                format!("{} {:.2} eV{electrons}", symbol::plain(&shown.runs), shown.level.energy_ev)
            });
            let levels: Vec<String> = levels.collect();
            format!(
                "{}{spin}, {}: {}",
                self.title_of(file),
                self.documents[file].geometry.point_group,
                levels.join("; ")
            )
        };
        let mut parts: Vec<String> = self.sketches.iter().map(column).collect();
        parts.extend(self.notes.iter().cloned());
        parts.join(". ")
    }

    fn title_of(&self, file: usize) -> String {
        self.options.names.get(file).cloned().unwrap_or_else(|| notes::short_name(&self.documents[file].source.file))
    }

    fn draw_axis(&self) -> Group {
        let scale = &self.scale;
        let (ticks, decimals) = scale.ticks(34.0);
        let mut axis = ink::group("axis");
        axis = axis.add(ink::stroke(ink::segment((AXIS - 6.0, scale.top), (AXIS - 6.0, scale.bottom)), INK, 0.6));
        for tick in ticks {
            let y = scale.place(tick);
            axis = axis.add(ink::stroke(ink::segment((AXIS - 9.0, y), (AXIS - 6.0, y)), INK, 0.6));
            let runs = words(&format!("{tick:.decimals$}").replace('-', "−"));
            let text = Line { anchor: Anchor::End, ..Line::at(AXIS - 11.0, y + 0.35 * TEXT, &runs) };
            axis = axis.add(ink::text(&text));
        }
        let what = match self.options.zero {
            Zero::Absolute => "orbital energy / eV",
            Zero::Homo => "orbital energy above HOMO / eV",
        };
        let runs = words(what);
        let y = f64::midpoint(scale.top, scale.bottom);
        axis.add(ink::text(&Line { anchor: Anchor::Middle, upwards: true, ..Line::at(9.0, y, &runs) }))
    }

    fn draw_titles(&self) -> Group {
        let mut titles = ink::group("titles");
        let share = (self.width - AXIS - MARGIN) / self.sketches.len() as f64;
        for (at, sketch) in self.sketches.iter().enumerate() {
            let file = sketch.column.file;
            let x = AXIS + share * (at as f64 + 0.5);
            let mut rows: Vec<(Vec<Run>, f64)> = Vec::new();
            if let Some(spin) = sketch.column.spin {
                rows.push((words(if spin == Spin::Alpha { "α" } else { "β" }), TEXT));
            }
            let title = notes::shorten(&self.title_of(file), TEXT, share - 4.0);
            rows.push((words(&title), TEXT));
            rows.push((symbol::group_runs(&self.documents[file].geometry.point_group), TEXT));
            if let Some(gap) = sketch.gap_ev().filter(|_| self.documents.len() > 1) {
                rows.push((vec![Run::new(format!("gap {gap:.2} eV"), Style::Upright)], NOTE));
            }
            for (row, (runs, size)) in rows.iter().enumerate() {
                let y = 11.0 + 10.0 * row as f64;
                titles = titles.add(ink::text(&Line { size: *size, anchor: Anchor::Middle, ..Line::at(x, y, runs) }));
            }
        }
        debug_assert!(self.top > 0.0);
        titles
    }

    /// Lines leave from labels and run level into the bars, so that within an irrep none crosses.
    fn draw_links(&self) -> Group {
        let mut irreps: Vec<&str> = self.links.iter().flatten().map(|link| link.irrep.as_str()).collect();
        irreps.sort_unstable();
        irreps.dedup();
        let mut drawn = ink::group("links");
        for (at, links) in self.links.iter().enumerate() {
            let (Some(left), Some(right)) = (self.sketches.get(at), self.sketches.get(at + 1)) else { continue };
            let start = self.middles[at] + left.half + super::column::LEADER;
            let bend = (start + left.label_width + 3.0, self.middles[at + 1] - right.half - 3.0);
            for link in links {
                let (Some(from), Some(to)) = (left.find(link.from), right.find(link.to)) else { continue };
                let kind = irreps.binary_search(&link.irrep.as_str()).unwrap_or(0);
                let (colour, dash) = (LINES[kind % LINES.len()], DASHES[(kind / LINES.len()) % DASHES.len()]);
                let path = format!(
                    "M{} {y}H{}L{} {z}H{}",
                    n(start + symbol::width(&from.runs, TEXT) + 1.5),
                    n(bend.0),
                    n(bend.1),
                    n(self.middles[at + 1] + to.bars.left - 1.5),
                    y = n(from.label_place),
                    z = n(to.place),
                );
                let mut line = ink::stroke(path, colour, 0.75)
                    .set("class", format!("{} stroke link", colour.name))
                    .set("data-irrep", link.irrep.as_str())
                    .set("data-column", at + 1)
                    .set("data-from-set", link.from)
                    .set("data-to-set", link.to)
                    .set("data-y", n(from.label_place))
                    .set("data-to-y", n(to.place));
                if !dash.is_empty() {
                    line = line.set("stroke-dasharray", dash);
                }
                drawn = drawn.add(line);
            }
        }
        drawn
    }
}

/// Links of each column to the next of its spin.
fn links(documents: &[Document], columns: &[Column], options: &Options, cautions: &mut Vec<String>) -> Vec<Vec<Link>> {
    let pair = |at: usize| {
        let (left, right) = (columns.get(at)?, columns.get(at + 1)?);
        (left.spin == right.spin && left.file + 1 == right.file).then_some((left, right))
    };
    let mut said: Vec<String> = Vec::new();
    let links = (0..columns.len()).map(|at| {
        let Some((left, right)) = pair(at) else { return Vec::new() };
        match kin(&documents[left.file], &documents[right.file], left, right) {
            Ok((a, b)) => correlation::links((left, &a), (right, &b), options.count),
            Err(reason) => {
                if !said.contains(&reason) {
                    said.push(reason);
                }
                Vec::new()
            }
        }
    });
    let links = links.collect();
    cautions.append(&mut said);
    links
}

fn kin(a: &Document, b: &Document, left: &Column, right: &Column) -> Result<(Parts, Parts), String> {
    if a.geometry.point_group == b.geometry.point_group {
        Ok((correlation::unchanged(left), correlation::unchanged(right)))
    } else {
        Err(format!("no lines between {} and {}", a.geometry.point_group, b.geometry.point_group))
    }
}

/// Colours as custom properties with what they are on white paper; only inside this diagram.
fn style(id: &str) -> String {
    let mut rules = String::new();
    for colour in ALL {
        let (name, light) = (colour.name, colour.light);
        rules.push_str(&format!("#{id} .{name}.stroke{{stroke:var(--orbsieve-{name},{light})}}"));
        rules.push_str(&format!("#{id} .{name}.fill{{fill:var(--orbsieve-{name},{light})}}"));
    }
    format!("<style>{rules}</style>")
}
