//! From random orders to refined dimension sets, judged by the goal and by a second circuit; and what any response must obey.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod bad_requests;
mod orders;
mod published_designs;
mod published_rows;
mod published_stubs;
mod random_orders;
mod response_laws;
mod second_circuit;
mod tapped;
