//! The whole figure: axis, columns with their titles, lines between them, notes.
//!
//! Here: sizes and places of the parts. Not here: marks inside a column (`diagram::column`).

use super::axis::Scale;
use super::column::{PITCH, Sketch, spin_name};
use super::correlation::{self, Link};
use super::ink::{self, Anchor, Line, NOTE, TEXT, n};
use super::kinship::{Unrelated, kin};
use super::level::{self, Column, is_unrestricted};
use super::notes::{self, wrap};
use super::palette::{ALL, DASHES, INK, LINES, QUIET};
use super::symbol::{self, Run, words};
use super::window::window;
use super::{DiagramError, Drawn, Options, Width, Zero};
use crate::model::Spin;
use crate::report::document::Document;
use std::cmp::Ordering;
use std::fmt::Write as _;
use svg::Node;
use svg::node::Blob;
use svg::node::element::{Description, Element, Group, Title};

/// Points a millimetre.
const POINTS: f64 = 72.0 / 25.4;
/// Least room for the axis with its numbers and words, and what the words and ticks take of it.
const AXIS: (f64, f64) = (38.0, 25.0);
/// Right margin.
const MARGIN: f64 = 6.0;
/// Least room for lines between columns.
const BETWEEN: f64 = 26.0;
/// Shortest and usual longest axis, points.
const HEIGHT: (f64, f64) = (210.0, 540.0);
/// Usual distance of ticks.
const TICKS: f64 = 34.0;
/// Line of titles.
const ROW: f64 = 10.0;
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
    Figure::new(documents, &columns, options, energies).map(Figure::draw)
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
        Some((low, high))
            if low.partial_cmp(&high) != Some(Ordering::Less)
                || low < -level::LARGEST_EV
                || high > level::LARGEST_EV =>
        {
            Err(DiagramError::Range { low, high })
        }
        _ => Ok(()),
    }
}

fn shift_to_homo(documents: &[Document], columns: &mut [Column]) {
    for file in 0..documents.len() {
        let of_file = || columns.iter().filter(|column| column.file == file);
        let highest = of_file().filter_map(Column::highest_occupied_ev).reduce(f64::max);
        let Some(zero) = highest else { continue };
        for column in columns.iter_mut().filter(|column| column.file == file) {
            for level in &mut column.levels {
                level.energy_ev -= zero;
                let _ = write!(level.story, "; {:.3} eV above the zero of the axis", level.energy_ev);
            }
        }
    }
}

/// The part of the width that a column has.
#[derive(Debug, Clone, Copy)]
struct Slot {
    start: f64,
    end: f64,
    /// Middle of the bars.
    middle: f64,
}

/// One journal column for one column of levels, or two of few levels each.
fn usual_width(columns: usize, most: f64, arrows: bool) -> Width {
    if columns == 1 || (columns == 2 && most <= 8.0 && !arrows) { Width::Single } else { Width::Double }
}

/// What columns need, and an equal part each of what is left.
fn slots(sketches: &[Sketch<'_>], needed: impl Fn(&Sketch<'_>) -> f64, start: f64, end: f64) -> Vec<Slot> {
    let spare = (end - start - sketches.iter().map(&needed).sum::<f64>()) / sketches.len().max(1) as f64;
    let mut slots = Vec::with_capacity(sketches.len());
    let mut start = start;
    for sketch in sketches {
        let (end, (left, right)) = (start + needed(sketch) + spare, sketch.extent());
        slots.push(Slot { start, end, middle: f64::midpoint(start + left, end - right) });
        start = end;
    }
    slots
}

/// Everything that is settled before marks are drawn.
struct Figure<'a> {
    documents: &'a [Document],
    options: &'a Options,
    scale: Scale,
    sketches: Vec<Sketch<'a>>,
    slots: Vec<Slot>,
    /// For each column the links to the next of the same spin.
    links: Vec<Vec<Link>>,
    axis: f64,
    width: f64,
    notes: Vec<String>,
    cautions: Vec<String>,
}

impl<'a> Figure<'a> {
    fn new(
        documents: &'a [Document],
        columns: &'a [Column],
        options: &'a Options,
        energies: (f64, f64),
    ) -> Result<Self, DiagramError> {
        let inside = |column: &Column| {
            column.levels.iter().filter(|level| (energies.0..=energies.1).contains(&level.energy_ev)).count()
        };
        let most = columns.iter().map(inside).max().unwrap_or(0) as f64;
        // Room for every label, and some air while the page allows it.
        let height = (2.2 * most * PITCH).clamp(HEIGHT.0, HEIGHT.1).max((most + 1.0) * PITCH);
        let asked = options.width.unwrap_or(usual_width(columns.len(), most, options.transitions));
        let title_lines = if documents.len() > 1 { 3.0 } else { 2.0 };
        let spins = if columns.iter().any(|column| column.spin.is_some()) { 1.0 } else { 0.0 };
        let top = 10.0 + ROW * (title_lines + spins);
        let scale = Scale { low: energies.0, high: energies.1, top, bottom: top + height };

        let numbers = tick_texts(&scale).into_iter().map(|(_, runs)| symbol::width(&runs, TEXT)).fold(0.0, f64::max);
        let axis = AXIS.0.max(AXIS.1 + numbers);
        let mut width = asked.mm() * POINTS;
        let share = (width - axis - MARGIN) / columns.len() as f64;
        let bars =
            if documents.len() > 1 { 0.45 * share } else { share - 0.3 * AXIS.0 - notes::beside(documents, options) };
        let mut sketches: Vec<Sketch<'a>> =
            columns.iter().map(|column| Sketch::new(column, &scale, bars.clamp(36.0, 125.0))).collect();
        for sketch in &mut sketches {
            notes::decorate(sketch, documents, options);
        }
        let between = if documents.len() > 1 { BETWEEN } else { 8.0 };
        let needed = |sketch: &Sketch<'_>| sketch.extent().0 + sketch.extent().1 + between;
        width = width.max(axis + MARGIN + sketches.iter().map(needed).sum::<f64>());
        let slots = slots(&sketches, needed, axis, width - MARGIN);

        let mut notes = notes::notes(documents, &sketches, options, energies);
        if width > asked.mm() * POINTS + 0.5 {
            notes.push(format!("Wider than {} mm: levels side by side need the room.", n(asked.mm())));
        }
        let mut cautions = Vec::new();
        let links = links(documents, columns, options, &mut notes, &mut cautions)?;
        notes.extend(cautions.iter().cloned());
        Ok(Self { documents, options, scale, sketches, slots, links, axis, width, notes, cautions })
    }

    fn draw(self) -> Drawn {
        let id = &safe_id(&self.options.id);
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
        for (sketch, slot) in self.sketches.iter().zip(&self.slots) {
            root.append(sketch.draw(slot.middle));
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
        let x = self.axis - 6.0;
        let mut axis = ink::group("axis");
        axis = axis.add(ink::stroke(ink::segment((x, scale.top), (x, scale.bottom)), INK, 0.6));
        for (tick, runs) in tick_texts(scale) {
            let y = scale.place(tick);
            axis = axis.add(ink::stroke(ink::segment((x - 3.0, y), (x, y)), INK, 0.6));
            let text = Line { anchor: Anchor::End, ..Line::at(x - 5.0, y + 0.35 * TEXT, &runs) };
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
        let mut write = |x: f64, row: usize, size: f64, runs: &[Run]| {
            let y = 11.0 + ROW * row as f64;
            let text = ink::text(&Line { size, anchor: Anchor::Middle, ..Line::at(x, y, runs) });
            titles.append(text);
        };
        let group = |file: usize| symbol::group_runs(&self.documents[file].geometry.point_group);
        let lone = self.documents.len() == 1;
        let over = |slots: &[Slot]| slots.first().zip(slots.last()).map_or(0.0, |(a, b)| f64::midpoint(a.start, b.end));
        if lone {
            let (x, room) = (over(&self.slots), self.width - self.axis - MARGIN);
            write(x, 0, TEXT, &words(&notes::shorten(&self.title_of(0), TEXT, room)));
            write(x, 1, TEXT, &group(0));
        }
        for (at, (sketch, slot)) in self.sketches.iter().zip(&self.slots).enumerate() {
            let (file, middle) = (sketch.column.file, slot.middle);
            if let Some(spin) = sketch.column.spin.filter(|_| file == 0) {
                // Over the bars of a lone file, over all columns of a spin of several.
                let x = if lone { middle } else { over(&self.slots[at..at + self.documents.len()]) };
                write(x, if lone { 2 } else { 0 }, TEXT, &words(if spin == Spin::Alpha { "α" } else { "β" }));
            }
            if !lone {
                let row = usize::from(sketch.column.spin.is_some());
                write(
                    middle,
                    row,
                    TEXT,
                    &words(&notes::shorten(&self.title_of(file), TEXT, slot.end - slot.start - 6.0)),
                );
                write(middle, row + 1, TEXT, &group(file));
                if let Some(gap) = sketch.gap_ev() {
                    write(middle, row + 2, NOTE, &words(&format!("gap {gap:.2} eV")));
                }
            }
        }
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
            let start = self.slots[at].middle + left.half + super::column::LEADER;
            let bend = (start + left.label_width + 3.0, self.slots[at + 1].middle - right.half - 3.0);
            for link in links {
                let (Some(from), Some(to)) = (left.find(link.from), right.find(link.to)) else { continue };
                let kind = irreps.binary_search(&link.irrep.as_str()).unwrap_or(0);
                let (colour, dash) = (LINES[kind % LINES.len()], DASHES[(kind / LINES.len()) % DASHES.len()]);
                let path = format!(
                    "M{} {y}H{}L{} {z}H{}",
                    n(start + symbol::width(&from.runs, TEXT) + 1.5),
                    n(bend.0),
                    n(bend.1),
                    n(self.slots[at + 1].middle + to.bars.left - 1.5),
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
fn links(
    documents: &[Document],
    columns: &[Column],
    options: &Options,
    notes: &mut Vec<String>,
    cautions: &mut Vec<String>,
) -> Result<Vec<Vec<Link>>, DiagramError> {
    let pair = |at: usize| {
        let (left, right) = (columns.get(at)?, columns.get(at + 1)?);
        (left.spin == right.spin && left.file + 1 == right.file).then_some((left, right))
    };
    let say = |words: Option<String>, to: &mut Vec<String>| to.extend(words.filter(|words| !to.contains(words)));
    let links = (0..columns.len()).map(|at| {
        let Some((left, right)) = pair(at) else { return Ok(Vec::new()) };
        match kin((&documents[left.file], &documents[right.file]), (left, right), options.way) {
            Ok(kin) => {
                say(kin.words, notes);
                say(kin.caution, cautions);
                let sources = (&documents[left.file].source, &documents[right.file].source);
                say(notes::cores(sources, options.count), cautions);
                Ok(correlation::links((left, &kin.left), (right, &kin.right), options.count))
            }
            Err(Unrelated::Reason(reason)) => {
                say(Some(reason), cautions);
                Ok(Vec::new())
            }
            Err(Unrelated::Way(error)) => Err(error),
        }
    });
    links.collect()
}

/// Energies of ticks, and how they are written.
fn tick_texts(scale: &Scale) -> Vec<(f64, Vec<Run>)> {
    let (ticks, decimals) = scale.ticks(TICKS);
    ticks.into_iter().map(|tick| (tick, words(&format!("{tick:.decimals$}").replace('-', "−")))).collect()
}

/// What an id may hold in SVG and in CSS.
fn safe_id(id: &str) -> String {
    let safe: String = id.chars().filter(|c| c.is_ascii_alphanumeric() || matches!(c, '-' | '_')).collect();
    if safe.starts_with(|c: char| c.is_ascii_alphabetic()) { safe } else { format!("levels{safe}") }
}

/// Colours as custom properties with what they are on white paper; only inside this diagram.
fn style(id: &str) -> String {
    let mut rules = String::new();
    for colour in ALL {
        let (name, light) = (colour.name, colour.light);
        for what in ["stroke", "fill"] {
            // Writing into a String cannot fail.
            let _ = write!(rules, "#{id} .{name}.{what}{{{what}:var(--orbsieve-{name},{light})}}");
        }
    }
    format!("<style>{rules}</style>")
}
