//! One closed boundary out of a polygon's rings: holes are joined to the outer ring where they touch it, or by a bridge.
//!
//! The boundary is a doubly linked list of nodes in flat vectors; several nodes may stand for one corner. A bridge is
//! walked twice, in opposite directions, so it adds nothing to the boundary's sum. Method: holes from left to right, each
//! from its leftmost corner to a corner it sees (Eberly, Triangulation by Ear Clipping, 2002); the corner is guessed with
//! plain arithmetic and checked exactly, and when the guess is wrong the corners are tried from the nearest on.

use crate::geom::{Point, Polygon, Ring, Segment, predicates, predicates::orient};

/// The linked boundary.
pub(super) struct Boundary {
    at: Vec<Point>,
    corner: Vec<u32>,
    prev: Vec<u32>,
    next: Vec<u32>,
    /// The ring each node came from, and for each ring one that it is joined to (itself when none; lower is outer).
    ring: Vec<u32>,
    joined_to: Vec<u32>,
}

impl Boundary {
    /// The rings as they are, each closed in itself. `None` when there are too many corners to number.
    pub(super) fn of(polygon: &Polygon) -> Option<Boundary> {
        let corners: usize = polygon.rings().map(Ring::len).sum();
        let room = corners + 2 * polygon.holes.len();
        // Bridges and split segments add nodes: at most about one per corner.
        u32::try_from(2 * room).ok()?;
        let mut boundary = Boundary {
            at: Vec::with_capacity(room),
            corner: Vec::with_capacity(room),
            prev: Vec::with_capacity(room),
            next: Vec::with_capacity(room),
            ring: Vec::with_capacity(room),
            joined_to: (0..=polygon.holes.len() as u32).collect(),
        };
        for (ring_idx, ring) in polygon.rings().enumerate() {
            let first = boundary.at.len() as u32;
            let end = first + ring.len() as u32;
            boundary.at.extend_from_slice(ring.corners());
            boundary.corner.extend(first..end);
            boundary.prev.push(end - 1);
            boundary.prev.extend(first..end - 1);
            boundary.next.extend(first + 1..end);
            boundary.next.push(first);
            boundary.ring.resize(end as usize, ring_idx as u32);
        }
        Some(boundary)
    }

    pub(super) fn len(&self) -> usize {
        self.at.len()
    }

    pub(super) fn at(&self, node: u32) -> Point {
        self.at[node as usize]
    }

    pub(super) fn corner(&self, node: u32) -> u32 {
        self.corner[node as usize]
    }

    pub(super) fn prev(&self, node: u32) -> u32 {
        self.prev[node as usize]
    }

    pub(super) fn next(&self, node: u32) -> u32 {
        self.next[node as usize]
    }

    /// Positive where the boundary turns left.
    pub(super) fn turn(&self, node: u32) -> f64 {
        orient(
            self.at(self.prev(node)),
            self.at(node),
            self.at(self.next(node)),
        )
    }

    pub(super) fn unlink(&mut self, node: u32) {
        let (before, after) = (self.prev(node), self.next(node));
        self.link(before, after);
    }

    fn link(&mut self, from: u32, to: u32) {
        self.next[from as usize] = to;
        self.prev[to as usize] = from;
    }

    fn copy(&mut self, node: u32, ring: u32) -> u32 {
        self.at.push(self.at(node));
        self.corner.push(self.corner(node));
        self.prev.push(node);
        self.next.push(node);
        self.ring.push(ring);
        self.at.len() as u32 - 1
    }

    fn nodes(&self) -> std::ops::Range<u32> {
        0..self.at.len() as u32
    }

    /// The lowest ring that a node's ring is joined to, 0 for the outer one.
    fn group(&self, node: u32) -> u32 {
        let mut ring = self.ring[node as usize];
        while self.joined_to[ring as usize] != ring {
            ring = self.joined_to[ring as usize];
        }
        ring
    }

    fn join_groups(&mut self, a: u32, b: u32) {
        self.joined_to[a.max(b) as usize] = a.min(b);
    }

    /// Whether the way from a node towards `p` starts into the inside, strictly between its two neighbours.
    fn opens_towards(&self, node: u32, p: Point) -> bool {
        let at = self.at(node);
        let left_of_next = orient(at, self.at(self.next(node)), p) > 0.0;
        let left_of_prev = orient(self.at(self.prev(node)), at, p) > 0.0;
        if self.turn(node) > 0.0 {
            left_of_next && left_of_prev
        } else {
            left_of_next || left_of_prev
        }
    }

    /// Joins every hole to the outer ring by a bridge. False when a hole sees no corner to its left, as may be with rings
    /// that touch or an invalid polygon.
    pub(super) fn bridge_holes(&mut self) -> bool {
        let n_rings = self.joined_to.len();
        if n_rings == 1 {
            return true;
        }
        let mut leftmost: Vec<Option<u32>> = vec![None; n_rings];
        for node in self.nodes() {
            let entry = &mut leftmost[self.group(node) as usize];
            if entry.is_none_or(|best| is_left_of(self.at(node), self.at[best as usize])) {
                *entry = Some(node);
            }
        }
        let mut holes: Vec<u32> = leftmost.into_iter().skip(1).flatten().collect();
        holes.sort_unstable_by(|&a, &b| order(self.at(a), self.at(b)));
        holes.into_iter().all(|hole| self.bridge(hole))
    }

    /// A bridge from the leftmost place of a hole to a corner of the joined boundary.
    fn bridge(&mut self, hole: u32) -> bool {
        let from = self.at(hole);
        if let Some(guess) = self.guess_seen(from)
            && let Some((outer, inner)) = self.bridge_ends(self.at(guess), hole)
        {
            self.splice(outer, inner);
            return true;
        }
        let mut others: Vec<u32> = self
            .nodes()
            .filter(|&v| self.group(v) == 0 && is_left_of(self.at(v), from))
            .collect();
        others.sort_by(|&a, &b| {
            let distance2 = |v: u32| self.at(v).distance2(from);
            distance2(a).total_cmp(&distance2(b))
        });
        let ends = others
            .into_iter()
            .find_map(|v| self.bridge_ends(self.at(v), hole));
        if let Some((outer, inner)) = ends {
            self.splice(outer, inner);
        }
        ends.is_some()
    }

    /// The corner that `from` most likely sees: the lower or upper end of the segment straight to its left, or a reflex
    /// corner in between, the one nearest in direction.
    fn guess_seen(&self, from: Point) -> Option<u32> {
        let mut hit_x = f64::NEG_INFINITY;
        let mut end = None;
        for v in self.nodes().filter(|&v| self.group(v) == 0) {
            let (a, b) = (self.at(v), self.at(self.next(v)));
            if a.y < from.y || b.y > from.y || a.y == b.y {
                continue;
            }
            let x = a.x + (from.y - a.y) / (b.y - a.y) * (b.x - a.x);
            if x <= from.x && x > hit_x {
                hit_x = x;
                end = Some(if a.x < b.x { v } else { self.next(v) });
            }
        }
        let end = end?;
        let tip = self.at(end);
        let slope = |p: Point| (p.y - from.y).abs() / (from.x - p.x);
        self.nodes()
            .filter(|&v| {
                let p = self.at(v);
                let between = |y: f64| from.y.min(tip.y) <= y && y <= from.y.max(tip.y);
                p.x >= tip.x && p.x < from.x && between(p.y) && self.group(v) == 0
            })
            .filter(|&v| slope(self.at(v)) <= slope(tip) && self.turn(v) <= 0.0)
            .min_by(|&v, &w| {
                let (p, q) = (self.at(v), self.at(w));
                slope(p).total_cmp(&slope(q)).then(q.x.total_cmp(&p.x))
            })
            .or(Some(end))
    }

    /// The two nodes a bridge from `hole`'s place to `to` must join, or `None` when it would meet the boundary on its way.
    fn bridge_ends(&self, to: Point, hole: u32) -> Option<(u32, u32)> {
        let (from, group) = (self.at(hole), self.group(hole));
        let find = |place: Point, towards: Point, group: u32| {
            self.nodes().find(|&v| {
                self.at(v) == place && self.group(v) == group && self.opens_towards(v, towards)
            })
        };
        let outer = find(to, from, 0)?;
        let inner = find(from, to, group)?;
        let bridge = Segment::new(from, to);
        let is_end = |p: Point| p == from || p == to;
        let obstructs = |v: u32| {
            let side = Segment::new(self.at(v), self.at(self.next(v)));
            if !boxes_overlap(bridge, side) {
                return false;
            }
            match (is_end(side.a), is_end(side.b)) {
                (false, false) => bridge.meets(side).is_some(),
                (true, true) => false,
                (true, false) => predicates::on_segment(from, to, side.b),
                (false, true) => predicates::on_segment(from, to, side.a),
            }
        };
        (!self.nodes().any(obstructs)).then_some((outer, inner))
    }

    /// Walks from `outer` over to `inner`, round its ring and back.
    fn splice(&mut self, outer: u32, inner: u32) {
        let (outer_group, inner_group) = (self.group(outer), self.group(inner));
        let (after, last) = (self.next(outer), self.prev(inner));
        let outer_again = self.copy(outer, outer_group);
        let inner_again = self.copy(inner, outer_group);
        self.link(outer, inner);
        self.link(last, inner_again);
        self.link(inner_again, outer_again);
        self.link(outer_again, after);
        self.join_groups(outer_group, inner_group);
    }

    /// Puts a node on every segment that a corner of another ring touches, and the triangle without area between the
    /// segment and its two parts. Cost n² for n corners.
    pub(super) fn split_touched_segments(&mut self, triangles: &mut Vec<[u32; 3]>) {
        for touching in self.nodes() {
            let p = self.at(touching);
            let mut start = 0;
            while let Some(&after) = self.next.get(start as usize) {
                let (a, b) = (self.at(start), self.at(after));
                let other_ring = self.ring[start as usize] != self.ring[touching as usize];
                if other_ring && p != a && p != b && predicates::on_segment(a, b, p) {
                    let node = self.copy(touching, self.ring[start as usize]);
                    triangles.push([start, after, node].map(|v| self.corner(v)));
                    self.link(start, node);
                    self.link(node, after);
                }
                start += 1;
            }
        }
    }

    /// Joins rings that share a place there. False when they share two, so that the inside is cut apart.
    pub(super) fn join_touching_rings(&mut self) -> bool {
        let mut nodes: Vec<u32> = self.nodes().collect();
        nodes.sort_by(|&a, &b| order(self.at(a), self.at(b)).then(a.cmp(&b)));
        let places = self.at.clone();
        for same in nodes.chunk_by(|&a, &b| places[a as usize] == places[b as usize]) {
            for (k, &node) in same.iter().enumerate() {
                let towards = self.at(self.next(node));
                let host = same[..k].iter().find(|&&v| self.opens_towards(v, towards));
                let Some(&host) = host else { continue };
                let (host_group, group) = (self.group(host), self.group(node));
                if host_group == group {
                    return false;
                }
                let (after_host, after) = (self.next(host), self.next(node));
                self.link(host, after);
                self.link(node, after_host);
                self.join_groups(host_group, group);
            }
        }
        true
    }
}

/// Order from left to right, and from below where that ties.
fn order(p: Point, q: Point) -> std::cmp::Ordering {
    p.x.total_cmp(&q.x).then(p.y.total_cmp(&q.y))
}

fn is_left_of(p: Point, q: Point) -> bool {
    p.x < q.x || (p.x == q.x && p.y < q.y)
}

fn boxes_overlap(s: Segment, t: Segment) -> bool {
    s.a.x.min(s.b.x) <= t.a.x.max(t.b.x)
        && t.a.x.min(t.b.x) <= s.a.x.max(s.b.x)
        && s.a.y.min(s.b.y) <= t.a.y.max(t.b.y)
        && t.a.y.min(t.b.y) <= s.a.y.max(s.b.y)
}
