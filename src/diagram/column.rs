//! One column drawn: bars, electrons, labels with their leader lines, the gap, transitions.
//!
//! Here: where marks of one column stand. Not here: which levels are shown, lines between columns (`diagram::figure`).

use super::axis::Scale;
use super::ink::{self, Anchor, Line, NOTE, TEXT, n};
use super::level::{Column, Electrons, Level, electrons_text};
use super::packing::{self, Placed, Wanted};
use super::palette::{ACCENT, FAINT, INK, QUIET};
use super::spread::spread;
use super::symbol::{self, Run, Style, label_runs, words};
use crate::model::Spin;
use svg::node::element::{Group, Title};

/// Height of a label, points: no two labels are nearer.
pub const PITCH: f64 = 8.8;
/// From the bars to the labels.
pub const LEADER: f64 = 14.0;
/// Width of a lane for an upright arrow with its text.
pub const LANE: f64 = 13.0;
const BAR_STROKE: f64 = 1.3;
/// Head of the arrows of the gap.
const HEAD: f64 = 2.6;

/// A level with its places.
#[derive(Debug, Clone)]
pub struct Shown<'a> {
    /// The level.
    pub level: &'a Level,
    /// Height of its bars.
    pub place: f64,
    /// Its bars, from the middle of the column.
    pub bars: Placed,
    /// Height of its label.
    pub label_place: f64,
    /// What the label says.
    pub runs: Vec<Run>,
}

/// A transition between two levels of a column.
#[derive(Debug, Clone, PartialEq)]
pub struct Arrow {
    /// Set that is left.
    pub from: usize,
    /// Set that is entered.
    pub to: usize,
    /// `x,y`.
    pub polarisation: String,
    /// What the pointer shows.
    pub story: String,
}

/// A column with places for all its marks; x counts from the middle of its bars.
#[derive(Debug, Clone)]
pub struct Sketch<'a> {
    /// What it shows.
    pub column: &'a Column,
    /// Highest energy first.
    pub shown: Vec<Shown<'a>>,
    /// Half the width of the bars.
    pub half: f64,
    /// Width of the widest label.
    pub label_width: f64,
    /// Transitions between levels shown.
    pub arrows: Vec<Arrow>,
    /// The gap stands beside the bars.
    pub gap: Option<(f64, f64)>,
}

impl<'a> Sketch<'a> {
    /// Places the levels that `scale` holds, bars within `width`.
    #[must_use]
    pub fn new(column: &'a Column, scale: &Scale, width: f64) -> Self {
        let inside = |level: &&Level| (scale.low..=scale.high).contains(&level.energy_ev);
        let levels: Vec<&Level> = column.levels.iter().rev().filter(inside).collect();
        let places: Vec<f64> = levels.iter().map(|level| scale.place(level.energy_ev)).collect();
        let wanted: Vec<Wanted> = levels
            .iter()
            .zip(&places)
            .map(|(level, &place)| Wanted { place, partners: level.partners.len() })
            .collect();
        let bars = packing::pack(&wanted, width);
        let labels = spread(&places, PITCH, scale.top, scale.bottom);
        let shown: Vec<Shown<'a>> = levels
            .iter()
            .zip(places)
            .zip(bars.into_iter().zip(labels))
            .map(|((level, place), (bars, label_place))| Shown { level, place, bars, label_place, runs: runs(level) })
            .collect();
        let half = shown.iter().map(|shown| shown.bars.right.max(-shown.bars.left)).fold(packing::BAR / 2.0, f64::max);
        let label_width = shown.iter().map(|shown| symbol::width(&shown.runs, TEXT)).fold(0.0, f64::max);
        Self { column, shown, half, label_width, arrows: Vec::new(), gap: None }
    }

    /// The level of this set, where it is shown.
    #[must_use]
    pub fn find(&self, set: usize) -> Option<&Shown<'a>> {
        self.shown.iter().find(|shown| shown.level.set == set)
    }

    /// Room needed left of the middle and right of it.
    #[must_use]
    pub fn extent(&self) -> (f64, f64) {
        let lanes = self.arrows.len() + usize::from(self.gap.is_some());
        (self.half + lanes as f64 * LANE + if lanes > 0 { 6.0 } else { 0.0 }, self.half + LEADER + self.label_width)
    }

    /// All marks, the middle of the bars at `x`.
    #[must_use]
    pub fn draw(&self, x: f64) -> Group {
        let mut drawn = ink::group("column").set("data-file", self.column.file + 1);
        if let Some(spin) = self.column.spin {
            drawn = drawn.set("data-spin", spin_name(spin));
        }
        let mut lane = x - self.half - 6.0;
        if let Some((homo, lumo)) = self.gap {
            lane -= LANE / 2.0;
            drawn = drawn.add(self.draw_gap(x, lane, homo, lumo));
            lane -= LANE / 2.0;
        }
        for arrow in &self.arrows {
            lane -= LANE / 2.0;
            if let Some(marks) = self.draw_transition(arrow, x, lane) {
                drawn = drawn.add(marks);
            }
            lane -= LANE / 2.0;
        }
        let mut leaders = ink::group("leaders");
        for shown in &self.shown {
            leaders = leaders.add(self.leader(shown, x));
        }
        drawn = drawn.add(leaders);
        for shown in &self.shown {
            drawn = drawn.add(self.draw_level(shown, x));
        }
        drawn
    }

    fn draw_level(&self, shown: &Shown<'_>, x: f64) -> Group {
        let level = shown.level;
        let class = if level.content.is_empty() { "level mixed" } else { "level" };
        let mut drawn = ink::group(class)
            .set("data-set", level.set)
            .set("data-energy-ev", format!("{:.6}", level.energy_ev))
            .set("data-label", level.label.as_str())
            .set("data-y", n(shown.place))
            .set("data-label-y", n(shown.label_place));
        if let Some(irrep) = &level.irrep {
            drawn = drawn.set("data-irrep", irrep.as_str());
        }
        if let Some(electrons) = level.electrons() {
            drawn = drawn.set("data-electrons", electrons_text(electrons));
        }
        drawn = drawn.add(Title::new(ink::printable(&level.story)));
        let label_x = x + self.half + LEADER;
        for (at, partner) in level.partners.iter().enumerate() {
            let left = x + shown.bars.left + at as f64 * shown.bars.step;
            let ends = ((left, shown.place), (left + shown.bars.bar, shown.place));
            let mut bar = ink::stroke(ink::segment(ends.0, ends.1), INK, BAR_STROKE)
                .set("class", "ink stroke bar")
                .set("data-orbital", partner.index);
            if level.content.is_empty() {
                bar = bar.set("stroke-dasharray", "2.4 1.2");
            }
            drawn = drawn.add(bar);
            if let Some(electrons) = partner.electrons {
                drawn = draw_electrons(drawn, electrons, left + shown.bars.bar / 2.0, shown);
            }
        }
        let base = shown.label_place + 0.34 * TEXT;
        drawn.add(ink::text(&Line::at(label_x, base, &shown.runs)))
    }

    /// From the bars to the label; it lies behind all bars.
    fn leader(&self, shown: &Shown<'_>, x: f64) -> svg::node::element::Path {
        let path = format!(
            "M{} {y}H{}L{} {}",
            n(x + shown.bars.right + 1.5),
            n(x + self.half + 2.0),
            n(x + self.half + LEADER - 1.5),
            n(shown.label_place),
            y = n(shown.place),
        );
        ink::stroke(path, FAINT, 0.45)
    }

    fn draw_gap(&self, x: f64, lane: f64, homo: f64, lumo: f64) -> Group {
        let ev = self.gap_ev().unwrap_or_default();
        let mut drawn = ink::group("gap").set("data-gap-ev", format!("{ev:.6}"));
        drawn = drawn
            .add(Title::new(format!("HOMO–LUMO gap {ev:.3} eV: a difference of orbital energies, not a band energy")));
        for (set, place) in [(self.column.homo, homo), (self.column.lumo, lumo)] {
            drawn = drawn.add(self.guide(set, place, x, lane));
        }
        let middle = f64::midpoint(homo, lumo);
        // Where two heads have no room inside, they point inwards from outside.
        let inside = homo - lumo > 4.0 * HEAD;
        for (end, outwards) in [(homo, 1.0), (lumo, -1.0)] {
            let from = if inside { middle } else { end + outwards * 3.0 * HEAD };
            let to = end - outwards * if inside { 0.8 } else { -0.8 };
            drawn = drawn.add(ink::stroke(ink::arrow(lane, from, to, HEAD), ACCENT, 0.7));
        }
        let text = words(&format!("{ev:.2} eV"));
        drawn.add(ink::text(&Line {
            size: NOTE + 0.5,
            anchor: Anchor::Middle,
            colour: ACCENT,
            upwards: true,
            ..Line::at(lane - 2.6, middle, &text)
        }))
    }

    /// LUMO − HOMO.
    #[must_use]
    pub fn gap_ev(&self) -> Option<f64> {
        Some(self.column.level(self.column.lumo)?.energy_ev - self.column.level(self.column.homo)?.energy_ev)
    }

    /// From the bars of a set to a lane on their left.
    fn guide(&self, set: Option<usize>, place: f64, x: f64, lane: f64) -> svg::node::element::Path {
        let left = set.and_then(|set| self.find(set)).map_or(-self.half, |shown| shown.bars.left);
        ink::stroke(ink::segment((lane - 2.0, place), (x + left - 1.5, place)), FAINT, 0.45)
            .set("stroke-dasharray", "0.9 1.3")
    }

    fn draw_transition(&self, arrow: &Arrow, x: f64, lane: f64) -> Option<Group> {
        let (from, to) = (self.find(arrow.from)?, self.find(arrow.to)?);
        let mut drawn = ink::group("transition")
            .set("data-from-set", arrow.from)
            .set("data-to-set", arrow.to)
            .set("data-polarisation", arrow.polarisation.as_str())
            .add(Title::new(ink::printable(&arrow.story)));
        for shown in [from, to] {
            drawn = drawn.add(self.guide(Some(shown.level.set), shown.place, x, lane));
        }
        let text: Vec<Run> = arrow
            .polarisation
            .chars()
            .map(|c| Run::new(c, if c == ',' { Style::Upright } else { Style::Italic }))
            .collect();
        let text = Line {
            size: NOTE + 0.5,
            anchor: Anchor::Middle,
            colour: QUIET,
            upwards: true,
            ..Line::at(lane - 2.6, f64::midpoint(from.place, to.place), &text)
        };
        Some(drawn.add(ink::stroke(ink::arrow(lane, from.place, to.place, 3.2), QUIET, 0.9)).add(ink::text(&text)))
    }
}

/// `alpha` or `beta`.
#[must_use]
pub fn spin_name(spin: Spin) -> &'static str {
    match spin {
        Spin::Alpha => "alpha",
        Spin::Beta => "beta",
    }
}

/// The label, with the electrons where they are no whole number for each partner.
fn runs(level: &Level) -> Vec<Run> {
    let mut runs = match level.content.as_slice() {
        [] => vec![Run::new(level.label.clone(), Style::Italic)],
        _ => level.label.split(" + ").map(label_runs).collect::<Vec<_>>().join(&Run::new(" + ", Style::Upright)),
    };
    if !level.complete {
        runs.push(Run::new("*", Style::Upright));
    }
    if let Some(electrons) = level.electrons().filter(|_| level.has_fractions()) {
        runs.push(Run::new(format!("\u{a0}({electrons:.2} e"), Style::Upright));
        runs.push(Run::new("−", Style::Super));
        runs.push(Run::new(")", Style::Upright));
    }
    runs
}

/// Arrows of one partner: solid for whole electrons, dashed for parts.
fn draw_electrons(mut drawn: Group, electrons: Electrons, x: f64, shown: &Shown<'_>) -> Group {
    let both = electrons.up > 0.0 && electrons.down > 0.0;
    let beside = if both { 0.16 * shown.bars.bar } else { 0.0 };
    let half = shown.bars.arrow;
    for (amount, x, name, (from, to)) in
        [(electrons.up, x - beside, "up", (half, -half)), (electrons.down, x + beside, "down", (-half, half))]
    {
        if amount <= 0.0 {
            continue;
        }
        let (from, to, head) = (shown.place + from, shown.place + to, (0.45 * half).min(2.0));
        let mut arrow = ink::group(&format!("electron {name}")).set("data-electrons", format!("{amount:.6}"));
        if (amount - amount.round()).abs() > 1e-3 {
            // Dashes would tear the head.
            let shaft = ink::stroke(ink::segment((x, from), (x, to)), INK, 0.7).set("stroke-dasharray", "1.3 0.9");
            arrow =
                arrow.add(shaft).add(ink::stroke(ink::barbs(x, to, if to < from { head } else { -head }), INK, 0.7));
        } else {
            arrow = arrow.add(ink::stroke(ink::arrow(x, from, to, head), INK, 0.7));
        }
        drawn = drawn.add(arrow);
    }
    drawn
}
