//! Plane geometry: points, rings, polygons with holes, exact predicates, validation, yards, triangles, convex pieces, what
//! keep-outs leave of an area, and a spatial index.
//!
//! Everything is in site metres, x east and y north, f64, near the origin. Decisions about orientation go through
//! [`predicates`]; distances are plain floating point. Nothing here knows of roles, rules or solving; a yard's
//! setback is a plain distance.

pub mod area;
pub mod bounds;
pub mod buildable;
pub mod pieces;
pub mod point;
pub mod predicates;
pub mod segment;
#[cfg(test)]
pub mod test_shapes;
pub mod tree;
pub mod triangulate;
pub mod validate;
pub mod yard;

pub use area::{Area, Polygon, Ring};
pub use bounds::Bounds;
pub use point::{Point, Vec2};
pub use segment::Segment;
