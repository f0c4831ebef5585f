//! Tables of cases: grids written as text, and what is read of them.

mod book;
mod circuits;
mod layouts;
mod mapping;
mod others;
mod scale;
mod values;
mod visit;
