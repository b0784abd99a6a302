//! The checker: recomputes a proof from the site, with outward rounding.
//!
//! It shares geom's plain types and exact predicates and the definition of the rows with the search, and nothing else. The
//! roots must cover the lot, every piece must be a leaf for a reason that holds or be cut in two, and the circle claimed
//! must clear every row. Halves are cut at rounded midpoints, so that they may miss slivers a rounding wide; the bounds
//! are raised by what a radius can change across one.

mod circle;
mod disc;
mod interval;
mod rows;

use super::proof::{PROOF_VERSION, Proof, ProofCover, ProofPiece, site_hash};
use crate::geom::{Point, Segment, predicates, triangulate};
use crate::limits::{Limits, LotRows};
use crate::site::Site;
use disc::Disc;
use interval::Vector;
use rows::Rows;

/// Most bisections below a root: far beyond what the coordinates' digits allow.
const MAX_DEPTH: u32 = 128;

/// What a proof was found to show.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Checked {
    /// No centre of the site allows a greater diameter, m.
    pub upper_m: f64,
    /// The diameter of the circle shown to fit, m; `None` where the proof says that nothing fits.
    pub diameter_m: Option<f64>,
    pub n_roots: usize,
    pub n_leaves: usize,
}

/// Why a proof does not hold. Pieces are counted from 1 in the order of the file.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CheckError {
    #[error("the proof has version {0}, and this program checks version 1")]
    Version(u32),
    #[error("the proof is of another site, or the site was changed since: its hash differs")]
    OtherSite,
    #[error("the claimed bound {0} m is no finite figure of at least the diameter")]
    Claim(f64),
    #[error("the claimed circle does not fit: {0}")]
    Circle(String),
    #[error("the triangles do not cover the lot{0}")]
    Cover(&'static str),
    #[error("piece {piece}: {why}")]
    Piece { piece: usize, why: String },
    #[error("the proof ends before every piece is accounted for")]
    Short,
    #[error("the proof goes on after every piece is accounted for")]
    Long,
}

/// Checks a proof against a site and its limits.
///
/// What comes back: the bound and the circle that the proof shows.
/// Method: module head. Cost: O(rows) for the circle, a few distances a leaf; O(boundary) for a leaf said to lie outside.
///
/// # Errors
/// The first thing that does not hold.
pub fn check(proof: &Proof, limits: &Limits, site: &Site) -> Result<Checked, CheckError> {
    if proof.roundstead_proof != PROOF_VERSION {
        return Err(CheckError::Version(proof.roundstead_proof));
    }
    if proof.site != site_hash(site) {
        return Err(CheckError::OtherSite);
    }
    let diameter_m = proof.circle.map(|c| c.diameter_m);
    if !proof.upper_m.is_finite() || proof.upper_m < diameter_m.unwrap_or(0.0) {
        return Err(CheckError::Claim(proof.upper_m));
    }
    if let Some(claimed) = &proof.circle {
        circle::check(claimed, limits).map_err(CheckError::Circle)?;
    }
    let roots = roots(&proof.cover, limits, site)?;
    let mut checker = Checker::new(proof, limits, &roots);
    for root in &roots {
        checker.piece(root, 0)?;
    }
    if checker.next != proof.pieces.len() {
        return Err(CheckError::Long);
    }
    Ok(Checked {
        upper_m: proof.upper_m,
        diameter_m,
        n_roots: roots.len(),
        n_leaves: checker.n_leaves,
    })
}

/// The roots of a cover, which is shown to hold the whole lot.
fn roots(cover: &ProofCover, limits: &Limits, site: &Site) -> Result<Vec<[Point; 3]>, CheckError> {
    let area = site.lot.area();
    let bounds = area.bounds();
    match cover {
        ProofCover::Round => {
            let root = bounds.triangle_round();
            let holds = |p: &Point| {
                (0..3).all(|k| predicates::orient(root[k], root[(k + 1) % 3], *p) >= 0.0)
            };
            let is_held = area.rings().flat_map(|ring| ring.corners()).all(holds);
            if is_held {
                Ok(vec![root])
            } else {
                Err(CheckError::Cover(
                    ": a corner lies outside the triangle round it",
                ))
            }
        }
        ProofCover::Box => Ok(bounds.halves().to_vec()),
        ProofCover::Triangles(parts) => {
            if limits.lot_rows == LotRows::HalfPlanes || parts.len() != area.parts.len() {
                return Err(CheckError::Cover(": it has another number of parts"));
            }
            let mut roots = Vec::new();
            for (part, triangles) in area.parts.iter().zip(parts) {
                let corners = triangulate::corners_of(part);
                let is_known = triangles
                    .iter()
                    .flatten()
                    .all(|&i| (i as usize) < corners.len());
                if !is_known || !triangulate::covers_exactly(part, triangles) {
                    return Err(CheckError::Cover(
                        ": their sides do not add up to its boundary",
                    ));
                }
                roots.extend(triangles.iter().map(|t| t.map(|i| corners[i as usize])));
            }
            Ok(roots)
        }
    }
}

struct Checker<'a> {
    proof: &'a Proof,
    limits: &'a Limits,
    rows: Rows<'a>,
    discs: Vec<Result<Disc, String>>,
    /// The claimed bound as a radius, m.
    upper: f64,
    next: usize,
    n_leaves: usize,
}

impl<'a> Checker<'a> {
    fn new(proof: &'a Proof, limits: &'a Limits, roots: &[[Point; 3]]) -> Checker<'a> {
        let rows = Rows::new(limits, roots, depth(&proof.pieces));
        let upper = 0.5 * proof.upper_m;
        let discs = proof
            .discs
            .iter()
            .map(|disc| Disc::of(disc, &rows, upper))
            .collect();
        Checker {
            proof,
            limits,
            rows,
            discs,
            upper,
            next: 0,
            n_leaves: 0,
        }
    }

    /// Takes the next piece of the proof for the triangle `t`.
    fn piece(&mut self, t: &[Point; 3], depth: u32) -> Result<(), CheckError> {
        let proof = self.proof;
        let index = self.next;
        let piece = proof.pieces.get(index).ok_or(CheckError::Short)?;
        self.next += 1;
        let refuse = |why: String| CheckError::Piece {
            piece: index + 1,
            why,
        };
        let shown = match piece {
            ProofPiece::Cut if depth >= MAX_DEPTH => {
                Err(format!("it is cut more than {MAX_DEPTH} times"))
            }
            ProofPiece::Cut => {
                return halves(t)
                    .iter()
                    .try_for_each(|half| self.piece(half, depth + 1));
            }
            ProofPiece::Rows(weights) => self.rows.bounds(t, weights, self.upper),
            ProofPiece::Disc(i) => self.in_disc(t, *i),
            ProofPiece::Outside => self.outside(t),
            ProofPiece::NearCorners => self.near_corners(t, depth),
        };
        self.n_leaves += 1;
        shown.map_err(refuse)
    }

    fn in_disc(&self, t: &[Point; 3], i: u32) -> Result<(), String> {
        let disc = self
            .discs
            .get(i as usize)
            .ok_or_else(|| format!("there is no disc {i}"))?;
        let disc = disc.as_ref().map_err(|why| format!("disc {i}: {why}"))?;
        if t.iter().all(|&c| disc.holds(c)) {
            Ok(())
        } else {
            Err(format!("it is not all inside disc {i}"))
        }
    }

    /// Exact: no boundary meets the triangle, and a corner of it is not in the region.
    fn outside(&self, t: &[Point; 3]) -> Result<(), String> {
        let sides = [0, 1, 2].map(|k| Segment::new(t[k], t[(k + 1) % 3]));
        let holds = |p: Point| sides.iter().all(|s| predicates::orient(s.a, s.b, p) >= 0.0);
        let meets = |s: &Segment| {
            holds(s.a) || holds(s.b) || sides.iter().any(|side| side.meets(*s).is_some())
        };
        if self.limits.region.boundary().iter().any(meets) {
            return Err("it is said to lie outside, and the boundary meets it".into());
        }
        if self.limits.region.contains(t[0]) {
            return Err("it is said to lie outside, and lies inside".into());
        }
        Ok(())
    }

    /// Every centre of a triangle lies within its longest side / √3 of a corner, and the corners are on the boundary.
    fn near_corners(&self, t: &[Point; 3], depth: u32) -> Result<(), String> {
        if depth > 0 || !matches!(self.proof.cover, ProofCover::Triangles(_)) {
            return Err("only a root has its corners on the boundary".into());
        }
        let side = (0..3)
            .map(|k| Vector::between(t[k], t[(k + 1) % 3]).length().hi)
            .fold(0.0, f64::max);
        let reach = (side / 3f64.sqrt().next_down()).next_up();
        if reach + self.rows.sliver_m() <= self.upper {
            return Ok(());
        }
        Err(format!(
            "a centre may be {reach} m from its corners, more than the claim"
        ))
    }
}

/// The most cuts above a leaf, at most [`MAX_DEPTH`]; deeper proofs are refused when they are walked.
fn depth(pieces: &[ProofPiece]) -> u32 {
    let mut open = vec![0u32];
    let mut most = 0;
    for piece in pieces {
        let depth = open.pop().unwrap_or(0);
        if *piece == ProofPiece::Cut && depth < MAX_DEPTH {
            open.extend([depth + 1; 2]);
            most = most.max(depth + 1);
        }
    }
    most
}

/// The halves of a triangle by the rule of the proof: at the middle of the longest side, the first of equals.
fn halves(t: &[Point; 3]) -> [[Point; 3]; 2] {
    let side2 = |k: usize| t[k].distance2(t[(k + 1) % 3]);
    let mut k = 0;
    for j in 1..3 {
        if side2(j) > side2(k) {
            k = j;
        }
    }
    let [a, b, c] = [t[k], t[(k + 1) % 3], t[(k + 2) % 3]];
    let m = a.midpoint(b);
    [[a, m, c], [m, b, c]]
}
