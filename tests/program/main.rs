//! The whole program and its routes to schemes. One binary: what the tests share is compiled and linked once.

mod conformance;
mod faults;
mod greet;
mod hostile;
mod interrupted;
mod judge;
mod mutation;
mod starters;
mod support;
