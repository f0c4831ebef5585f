//! The figures: what is drawn is where the numbers say, nothing overlaps or leaves its drawing, whatever the workbook holds.

#[path = "figures/house.rs"]
mod house;

#[path = "figures/anything.rs"]
mod anything;
#[path = "figures/loads.rs"]
mod loads;
#[path = "figures/position.rs"]
mod position;
#[path = "figures/svg.rs"]
mod svg;
#[path = "figures/tree.rs"]
mod tree;
