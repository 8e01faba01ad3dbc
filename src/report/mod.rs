//! What a person or a program reads: the document as data, and its printed forms.
//!
//! Only this layer knows JSON keys, electronvolts and ångströms.

pub mod ascii;
pub mod audit;
pub mod audit_text;
pub mod build;
pub mod csv;
pub mod document;
pub mod explain;
pub mod explain_pair;
pub mod explain_text;
pub mod fit;
pub mod paint;
pub mod modes;
pub mod modes_text;
pub mod double_table;
pub mod states;
pub mod states_text;
pub mod placement;
pub mod purify;
#[cfg(feature = "parquet")]
pub mod parquet;
pub mod record;
pub mod rows;
pub mod rule;
pub mod schema;
pub mod sheets;
pub mod table;
pub mod text;
pub mod transitions;
pub mod transitions_text;
pub mod typeset;
pub mod unicode;
