//! Guides, a page each. The same texts stand as Markdown in `src/guide/`; their examples run as tests.

#[doc = include_str!("scheme.md")]
pub mod scheme {}

#[doc = include_str!("conversation.md")]
pub mod conversation {}

#[doc = include_str!("claims.md")]
pub mod claims {}

#[doc = include_str!("problem.md")]
pub mod problem {}

#[doc = include_str!("dossier.md")]
pub mod dossier {}

#[doc = include_str!("ci.md")]
pub mod ci {}
