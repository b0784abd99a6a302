//! Other spots: the next best places for the circle that are places of their own.
//!
//! Climbs from a lattice of places over the lot, each ending at a spot held from all sides or between two facing rows. They
//! are verified, and they are what the climbs met: not proven to be the next best.

use super::Circle;
use super::climb::{Spot, climb, settled_disc};
use super::index::RowIndex;
use super::slide::free_direction;
use super::verify::verified_radius;
use crate::geom::{Point, triangulate};
use crate::lp::game::Game;
use crate::site::Site;

/// Spots reported at the most.
const MAX_SPOTS: usize = 4;

/// Places a side of the lattice over the lot's box.
const LATTICE: usize = 16;

/// Corners up to which the lot's own triangles give places too: narrow parts fall through a lattice.
const MAX_CORNERS: usize = 400;

/// The best spots beside `best`, largest first; none has its centre in the circle of a better one.
pub(super) fn other_spots(
    index: &RowIndex,
    site: &Site,
    best: &Circle,
    snap: &dyn Fn(Point) -> Point,
) -> Vec<Circle> {
    let mut game = Game::new();
    let mut found: Vec<Spot> = starts(index, site)
        .into_iter()
        .filter(|&p| index.is_in_region(p))
        .map(|p| (p, index.least(p, std::iter::empty())))
        .filter(|(_, least)| least.radius > 0.0)
        .map(|(p, least)| climb(index, &mut game, (p, least), least.radius, &[]))
        .filter(|spot| settled_disc(index, spot).is_some() || free_direction(index, spot).is_some())
        .collect();
    found.sort_by(|a, b| b.radius.total_cmp(&a.radius));
    let mut taken = vec![*best];
    for spot in found {
        let is_apart = |c: &Circle| distance_to(c, spot.centre) > 0.5 * c.diameter_m;
        if taken.len() <= MAX_SPOTS && taken.iter().all(is_apart) {
            let centre = snap(spot.centre);
            if let Ok(radius) = verified_radius(
                index.limits(),
                centre,
                spot.radius
                    .min(index.least(centre, std::iter::empty()).radius),
            ) {
                taken.push(Circle {
                    centre,
                    diameter_m: 2.0 * radius,
                    slide: None,
                });
            }
        }
    }
    taken.split_off(1)
}

/// Distance from a centre to a circle's own centre, or to its slide.
fn distance_to(circle: &Circle, p: Point) -> f64 {
    match circle.slide {
        Some([a, b]) => crate::geom::Segment::new(a, b).distance(p),
        None => circle.centre.distance(p),
    }
}

fn starts(index: &RowIndex, site: &Site) -> Vec<Point> {
    let bounds = index.limits().region.bounds();
    let at = |i: usize| (i as f64 + 0.5) / LATTICE as f64;
    let place = |k: usize| {
        let (x, y) = (at(k % LATTICE), at(k / LATTICE));
        Point::new(
            bounds.min.x + x * bounds.width(),
            bounds.min.y + y * bounds.height(),
        )
    };
    let mut starts: Vec<Point> = (0..LATTICE * LATTICE).map(place).collect();
    let area = site.lot.area();
    if area.n_segments() <= MAX_CORNERS {
        for part in &area.parts {
            let corners = triangulate::corners_of(part);
            let centroid = |t: [u32; 3]| {
                let [a, b, c] = t.map(|i| corners[i as usize]);
                Point::new((a.x + b.x + c.x) / 3.0, (a.y + b.y + c.y) / 3.0)
            };
            starts.extend(
                triangulate::triangulate(part)
                    .unwrap_or_default()
                    .into_iter()
                    .map(centroid),
            );
        }
    }
    starts
}
