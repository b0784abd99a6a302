//! To come.
use super::{Area, Point};
/// Stub.
pub fn convex_pieces(area: &Area) -> Option<Vec<Vec<Point>>> {
    area.is_convex()
        .then(|| vec![area.parts[0].outer.corners().to_vec()])
}
