//! A proof that no larger circle fits, as it is written to a file.
//!
//! It holds the site's own hash, the claim, the cover of the lot by triangles, and for every triangle the bisections and,
//! for each leaf, why no centre in it allows more: at most three rows and their weights, a settled disc, or that it lies
//! outside. [`super::check`] recomputes all of it from the site.

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

use super::climb::SettledDisc;
use super::record::{Leaf, Node, Record};
use super::roots::Cover;
use super::search::Search;
use super::{Effort, PlaceError, Placement, finished, index::RowIndex, roots};
use crate::geom::Point;
use crate::limits::Limits;
use crate::site::Site;

/// The version of the format this program writes and reads.
pub const PROOF_VERSION: u32 = 1;

/// A proof. Coordinates are of the site plane, lengths in metres.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Proof {
    pub roundstead_proof: u32,
    /// SHA-256 over the site's description, in hexadecimal.
    pub site: String,
    /// The centre and diameter found; `None` where nothing fits.
    pub circle: Option<ProvenCircle>,
    /// No centre allows a greater diameter.
    pub upper_m: f64,
    pub cover: ProofCover,
    pub discs: Vec<ProofDisc>,
    /// The pieces in preorder: root after root, a cut piece before its halves.
    pub pieces: Vec<ProofPiece>,
}

/// The circle a proof speaks of.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ProvenCircle {
    pub centre: [f64; 2],
    pub diameter_m: f64,
}

/// How the roots cover the lot.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum ProofCover {
    /// One triangle round the lot's box.
    Round,
    /// The two halves of the lot's box.
    Box,
    /// For each part of the lot, triangles by the part's corners.
    Triangles(Vec<Vec<[u32; 3]>>),
}

/// A disc round a centre that three rows settle.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ProofDisc {
    pub centre: [f64; 2],
    pub rows: [u32; 3],
}

/// A piece: cut in two at the middle of its longest side, or a leaf with its reason.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum ProofPiece {
    Cut,
    /// Rows and weights whose sum bounds the piece.
    Rows(Vec<(u32, f64)>),
    /// All inside the settled disc with this index.
    Disc(u32),
    Outside,
    /// A root on the lot's corners, no centre of which is farther from them than the claim.
    NearCorners,
}

/// The hash of a site's description: everything a placement depends on, to the last digit.
pub fn site_hash(site: &Site) -> String {
    let digest = Sha256::digest(format!("{site:?}").as_bytes());
    digest.iter().map(|byte| format!("{byte:02x}")).collect()
}

/// The largest circle of a site with its proof.
///
/// As [`super::largest`], keeping the record of the search.
///
/// # Errors
/// As [`super::largest`].
pub fn prove(
    limits: &Limits,
    site: &Site,
    effort: Effort,
    snap: &dyn Fn(Point) -> Point,
) -> Result<(Placement, Proof), PlaceError> {
    let index = RowIndex::new(limits);
    let roots = roots::roots(site.lot.area(), limits);
    let record = Record::new(roots.triangles.len());
    let (found, record) = Search::new(&index, effort, Some(record)).run(&roots);
    let placement = finished(&found, &index, snap)?;
    let record = record.unwrap_or_else(|| Record::new(0));
    let circle = placement.circle.map(|c| ProvenCircle {
        centre: [c.centre.x, c.centre.y],
        diameter_m: c.diameter_m,
    });
    let proof = Proof {
        roundstead_proof: PROOF_VERSION,
        site: site_hash(site),
        circle,
        upper_m: placement.upper_m,
        cover: match roots.cover {
            Cover::Round => ProofCover::Round,
            Cover::Box => ProofCover::Box,
            Cover::Triangles(parts) => ProofCover::Triangles(parts),
        },
        discs: record.discs().iter().map(disc).collect(),
        pieces: record.preorder().into_iter().map(piece).collect(),
    };
    Ok((placement, proof))
}

fn disc(disc: &SettledDisc) -> ProofDisc {
    ProofDisc {
        centre: [disc.centre.x, disc.centre.y],
        rows: disc.rows,
    }
}

fn piece(node: Node) -> ProofPiece {
    match node {
        Node::Split(_) => ProofPiece::Cut,
        // A search that ran to its end has looked at every piece; an open one would prove nothing and be refused.
        Node::Open => ProofPiece::Rows(Vec::new()),
        Node::Leaf(Leaf::Bounded(weights)) => ProofPiece::Rows(
            weights
                .into_iter()
                .filter(|(_, weight)| *weight > 0.0)
                .collect(),
        ),
        Node::Leaf(Leaf::Settled(i)) => ProofPiece::Disc(i),
        Node::Leaf(Leaf::Outside) => ProofPiece::Outside,
        Node::Leaf(Leaf::NearCorners) => ProofPiece::NearCorners,
    }
}
