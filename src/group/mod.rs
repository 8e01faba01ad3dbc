//! Point groups: operations, characters, irreps, their names, and finding them in a set of sites.
//!
//! Knows no molecule, basis or file.

mod arrangement;
mod atomic;
mod character_table;
pub mod characters;
pub mod double;
pub mod double_name;
pub mod detect;
mod elements;
pub mod error;
mod exact;
mod fit;
mod frame;
pub mod functions;
pub mod harmonics;
pub mod identify;
pub mod irrep_name;
mod ladder;
mod linear;
mod matching;
mod matrices;
mod mulliken;
pub mod multiplication;
pub mod operation;
pub mod parent;
pub mod point_group;
pub mod products;
pub mod schoenflies;
pub mod settings;
pub mod subgroups;
pub mod symbols;
pub mod symmetry;

pub use arrangement::NearestSites;
pub use detect::{DetectError, DetectSettings, Detection, Rung, detect};
pub use double::{DoubleClass, DoubleGroup, DoubleIrrep, Kramers};
pub use double_name::DoubleName;
pub use error::GroupError;
pub use exact::exact_character;
pub use identify::{identify, standard_frames};
pub use irrep_name::IrrepName;
pub use matching::SiteOperation;
pub use operation::Operation;
pub use parent::{ParentFit, fit_parent};
pub use point_group::{Class, Element, Irrep, PointGroup};
pub use schoenflies::GroupName;
pub use settings::Setting;
pub use subgroups::Subgroup;
pub use symmetry::{Deviation, Frame, OtherSetting, Passage, Site, Symmetry};
