//! The roots of a search: triangles that together cover the region.
//!
//! A convex lot in half-planes has one triangle round its box, since a half-plane allows nothing outside. Other lots are cut
//! into triangles on their own corners; a lot of many corners that fills its box well is covered by the box's two triangles
//! instead, because a triangulation would cost more than the search.

use super::piece::Triangle;
use crate::geom::{Area, Bounds, Polygon, triangulate};
use crate::limits::{Limits, LotRows};

/// How the roots were made; what a check needs to see that they cover the region.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Cover {
    /// One triangle round the lot's box.
    Round,
    /// Two triangles of the lot's box.
    Box,
    /// Triangles on the lot's own corners: for each part, indices into its corners, outer ring first, then the holes.
    Triangles(Vec<Vec<[u32; 3]>>),
}

/// The triangles, and how they were made.
pub(super) struct Roots {
    pub triangles: Vec<Triangle>,
    /// For triangles on the lot's corners, the boundary segments that start at them; empty for other covers.
    pub seeds: Vec<[u32; 3]>,
    pub cover: Cover,
}

/// A lot of fewer corners than this is always cut on its corners. With 400 here, lots with holes took a quarter more
/// instructions, and blobs about as many.
const FEW_CORNERS: usize = 24;

/// A box is preferred while its area, in squares of (area / perimeter), stays under this many per corner. Area / perimeter
/// is about half the room's radius, and a search over a box visits a few pieces per such square. Ten times the value was no
/// better on lots of about a hundred corners.
const BOX_SQUARES_PER_CORNER: f64 = 4.0;

/// The roots for the limits of a lot.
pub(super) fn roots(lot: &Area, limits: &Limits) -> Roots {
    let bounds = limits.region.bounds();
    if limits.lot_rows == LotRows::HalfPlanes {
        return Roots {
            triangles: vec![bounds.triangle_round()],
            seeds: Vec::new(),
            cover: Cover::Round,
        };
    }
    let boxed = || Roots {
        triangles: bounds.halves().to_vec(),
        seeds: Vec::new(),
        cover: Cover::Box,
    };
    if fills_its_box(lot, bounds) {
        return boxed();
    }
    match lot
        .parts
        .iter()
        .map(triangulate::triangulate)
        .collect::<Option<Vec<_>>>()
    {
        Some(cut) => on_corners(&lot.parts, cut),
        None => boxed(),
    }
}

fn fills_its_box(lot: &Area, bounds: Bounds) -> bool {
    let n = lot.n_segments();
    if n < FEW_CORNERS {
        return false;
    }
    let perimeter: f64 = lot.rings().map(|r| r.perimeter()).sum();
    let half_width = lot.area_m2() / perimeter;
    bounds.width() * bounds.height() < BOX_SQUARES_PER_CORNER * n as f64 * half_width * half_width
}

/// The triangles of each part, by its corners. A part's corners are counted ring by ring, as the boundary's segments are.
fn on_corners(parts: &[Polygon], cut: Vec<Vec<[u32; 3]>>) -> Roots {
    let n = cut.iter().map(Vec::len).sum();
    let (mut triangles, mut seeds) = (Vec::with_capacity(n), Vec::with_capacity(n));
    let mut base = 0;
    for (part, cut) in parts.iter().zip(&cut) {
        let corners = triangulate::corners_of(part);
        triangles.extend(cut.iter().map(|t| t.map(|i| corners[i as usize])));
        seeds.extend(cut.iter().map(|t| t.map(|i| base + i)));
        base += corners.len() as u32;
    }
    Roots {
        triangles,
        seeds,
        cover: Cover::Triangles(cut),
    }
}
