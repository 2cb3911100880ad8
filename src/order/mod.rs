//! What is wanted: the order, valid by construction, every default resolved and recorded.

mod board;
mod classes;
mod context;
mod laminate;
mod launch;
mod read;
mod requirement;
mod shop;
mod source;
mod stack;
mod table;
mod types;
mod write;

pub use classes::{Classes, LaminateClass};
pub use context::{Context, MOST_PROBLEMS, parse};
pub use read::{OWN_CLASS, read};
pub(crate) use read::{finish, read_into};
pub use source::{LARGEST_FILE, Source};
pub use stack::StackLayer;
pub use table::{Size, Table, kind_of, nearest};
pub use types::*;
pub use write::write;
pub(crate) use write::{plain_number, quoted, write_with_degree};
