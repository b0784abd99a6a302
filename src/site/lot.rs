//! The lot: its area, and its boundary gathered into numbered lot lines.
//!
//! A lot line is a run of neighbouring segments of one ring that share role and setback and turn by less than
//! [`SMOOTH_TURN_DEG`] at each corner, so that a street curve sampled in thirty segments is one line. Lines are numbered from
//! 1 in the order of the rings, the first line of a ring starting at its first corner that is not smooth.

use super::{SiteError, checked_distance};
use crate::geom::{Area, Ring, Segment, Vec2};

/// Corners that turn by less than this belong to one lot line. 15 degrees: curves on plats are sampled finer, while the
/// corners of a surveyed lot turn by more; common practice, no source.
pub const SMOOTH_TURN_DEG: f64 = 15.0;
/// cos² of [`SMOOTH_TURN_DEG`], so that the test needs neither root nor arc tangent.
const SMOOTH_COS2: f64 = 0.933_012_701_892_219_3;

/// What a lot line is to the lot.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Role {
    Front,
    Side,
    Rear,
    StreetSide,
    #[default]
    Other,
}

impl Role {
    pub const ALL: [Role; 5] = [
        Role::Front,
        Role::Side,
        Role::Rear,
        Role::StreetSide,
        Role::Other,
    ];

    /// The name in files and on screen.
    pub fn name(self) -> &'static str {
        match self {
            Role::Front => "front",
            Role::Side => "side",
            Role::Rear => "rear",
            Role::StreetSide => "street-side",
            Role::Other => "other",
        }
    }

    pub fn from_name(name: &str) -> Option<Role> {
        Role::ALL.into_iter().find(|r| r.name() == name)
    }
}

/// Role and setback of one boundary segment.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Boundary {
    pub role: Role,
    pub setback_m: f64,
}

/// A run of boundary segments with one number, one role and one setback.
#[derive(Clone, Debug, PartialEq)]
pub struct LotLine {
    /// From 1, over the whole lot.
    pub number: u32,
    pub role: Role,
    pub setback_m: f64,
    /// Index of the ring in the order of [`Area::rings`].
    pub ring: usize,
    /// First segment of the run within the ring.
    pub first: usize,
    /// How many segments, wrapping at the ring's end.
    pub len: usize,
}

/// A validated area with its boundary in lot lines.
#[derive(Clone, Debug, PartialEq)]
pub struct Lot {
    area: Area,
    /// One per segment, in the order of [`Area::segments`].
    boundary: Vec<Boundary>,
    /// The lot line of each segment, as an index into `lines`.
    line_of: Vec<u32>,
    lines: Vec<LotLine>,
}

impl Lot {
    /// A lot with no setbacks.
    pub fn plain(area: Area) -> Lot {
        let boundary = vec![Boundary::default(); area.n_segments()];
        Lot::gathered(area, boundary)
    }

    /// A lot with one role and setback per segment, in the order of [`Area::segments`].
    ///
    /// # Errors
    /// When the count does not fit or a setback is not a distance.
    pub fn new(area: Area, boundary: Vec<Boundary>) -> Result<Lot, SiteError> {
        if boundary.len() != area.n_segments() {
            return Err(SiteError::SetbackCount {
                given: boundary.len(),
                wanted: area.n_segments(),
            });
        }
        for (i, b) in boundary.iter().enumerate() {
            checked_distance(
                format_args!("the setback of segment {}", i + 1).to_string(),
                b.setback_m,
            )?;
        }
        Ok(Lot::gathered(area, boundary))
    }

    fn gathered(area: Area, boundary: Vec<Boundary>) -> Lot {
        let mut lot = Lot {
            line_of: vec![0; boundary.len()],
            lines: Vec::new(),
            area,
            boundary,
        };
        let mut base = 0;
        for (ring_idx, ring) in lot.area.rings().enumerate() {
            gather_ring(
                ring_idx,
                ring,
                &lot.boundary[base..base + ring.len()],
                &mut lot.lines,
                &mut lot.line_of[base..base + ring.len()],
            );
            base += ring.len();
        }
        lot
    }

    pub fn area(&self) -> &Area {
        &self.area
    }

    pub fn lines(&self) -> &[LotLine] {
        &self.lines
    }

    /// Role and setback of each segment, in the order of [`Area::segments`].
    pub fn boundary(&self) -> &[Boundary] {
        &self.boundary
    }

    /// For each segment, in the order of [`Area::segments`], the index of its line in [`Lot::lines`].
    pub fn line_of_segments(&self) -> &[u32] {
        &self.line_of
    }

    /// The segments of a lot line, in order.
    pub fn segments_of(&self, line: &LotLine) -> impl Iterator<Item = Segment> + '_ {
        let ring = self
            .area
            .rings()
            .nth(line.ring)
            .expect("a lot line names a ring of its own lot");
        let (first, len) = (line.first, line.len);
        (0..len).map(move |k| ring.segment((first + k) % ring.len()))
    }
}

/// Splits one ring into lot lines; `line_of` is the ring's own stretch.
fn gather_ring(
    ring_idx: usize,
    ring: &Ring,
    boundary: &[Boundary],
    lines: &mut Vec<LotLine>,
    line_of: &mut [u32],
) {
    let n = ring.len();
    let mut before = (ring.segment(n - 1).vector(), boundary[n - 1]);
    for (i, s) in ring.segments().enumerate() {
        let here = (s.vector(), boundary[i]);
        line_of[i] = u32::from(here.1 == before.1 && is_smooth(before.0, here.0));
        before = here;
    }
    let start = line_of
        .iter()
        .position(|&goes_on| goes_on == 0)
        .unwrap_or(0);
    for i in (start..n).chain(0..start) {
        if i == start || line_of[i] == 0 {
            let number = lines.len() as u32 + 1;
            let Boundary { role, setback_m } = boundary[i];
            lines.push(LotLine {
                number,
                role,
                setback_m,
                ring: ring_idx,
                first: i,
                len: 0,
            });
        }
        let line = lines.len() - 1;
        lines[line].len += 1;
        line_of[i] = line as u32;
    }
}

/// Whether the boundary turns by less than [`SMOOTH_TURN_DEG`] from direction u to direction v.
fn is_smooth(u: Vec2, v: Vec2) -> bool {
    let dot = u.dot(v);
    dot > 0.0 && dot * dot > SMOOTH_COS2 * u.length2() * v.length2()
}
