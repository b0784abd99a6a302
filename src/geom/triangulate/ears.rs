//! Ear clipping of one closed boundary.
//!
//! Corners wait in a queue to be tried. One that fails is tried again only when a neighbour was cut off or the corner
//! that blocked it ceased to be reflex, so that the number of trials stays near the number of corners. A corner whose
//! neighbour was cut off goes to the back of the queue, so that triangles grow alike all round instead of fanning out.

use super::{bridges::Boundary, reflex::ReflexGrid};
use crate::geom::{Point, predicates::orient};

/// No node, no place in the queue, no entry.
const NONE: u32 = u32::MAX;

struct Clipper {
    boundary: Boundary,
    reflex: ReflexGrid,
    /// Nodes to try; an entry counts when `queued_at` of its node still points to it.
    queue: Vec<u32>,
    queued_at: Vec<u32>,
    /// For each node the reflex corner that was last found in its triangle.
    blocker: Vec<u32>,
    /// For each reflex corner the nodes it blocks: the first of a chain of entries of node and next entry.
    first_blocked: Vec<u32>,
    blocked: Vec<(u32, u32)>,
}

/// Cuts ears off until a triangle is left. False when no ear can be found, so that the boundary was not a valid one.
pub(super) fn clip_ears(boundary: Boundary, triangles: &mut Vec<[u32; 3]>) -> bool {
    let n = boundary.len();
    let mut clipper = Clipper {
        reflex: ReflexGrid::of(&boundary),
        boundary,
        queue: Vec::with_capacity(3 * n),
        queued_at: (0..n as u32).collect(),
        blocker: vec![NONE; n],
        first_blocked: vec![NONE; n],
        blocked: Vec::new(),
    };
    clipper.queue.extend(0..n as u32);
    let mut left = n;
    let mut head = 0;
    while let Some(&node) = clipper.queue.get(head) {
        let is_current = clipper.queued_at[node as usize] == head as u32;
        head += 1;
        if !is_current || !clipper.is_ear(node) {
            continue;
        }
        triangles.push(clipper.triangle(node).map(|v| clipper.boundary.corner(v)));
        if left == 3 {
            return true;
        }
        clipper.cut(node);
        left -= 1;
    }
    false
}

impl Clipper {
    fn triangle(&self, node: u32) -> [u32; 3] {
        [self.boundary.prev(node), node, self.boundary.next(node)]
    }

    /// Whether the node turns left and no reflex corner lies in its closed triangle other than at the triangle's corners.
    fn is_ear(&mut self, node: u32) -> bool {
        let [a, b, c] = self.triangle(node).map(|v| self.boundary.at(v));
        if orient(a, b, c) <= 0.0 {
            return false;
        }
        let blocks = |p: Point| {
            orient(c, a, p) >= 0.0
                && orient(a, b, p) >= 0.0
                && orient(b, c, p) >= 0.0
                && p != a
                && p != b
                && p != c
        };
        let blocker = &mut self.blocker[node as usize];
        if self.reflex.get(*blocker).is_some_and(blocks) {
            // It waits for that corner already.
            return false;
        }
        let Some(found) = self.reflex.find([a, b, c], blocks) else {
            return true;
        };
        *blocker = found;
        let first = &mut self.first_blocked[found as usize];
        self.blocked.push((node, *first));
        *first = self.blocked.len() as u32 - 1;
        false
    }

    /// Takes the node off the boundary and queues what may have become an ear by that.
    fn cut(&mut self, node: u32) {
        let [before, _, after] = self.triangle(node);
        self.boundary.unlink(node);
        self.queued_at[node as usize] = NONE;
        self.blocker[node as usize] = NONE;
        for v in [before, after] {
            self.enqueue(v);
            if self.reflex.holds(v) && self.boundary.turn(v) > 0.0 {
                self.reflex.remove(v, self.boundary.at(v));
                self.unblock(v);
            }
        }
    }

    fn unblock(&mut self, blocker: u32) {
        let mut entry = self.first_blocked[blocker as usize];
        while let Some(&(node, next)) = self.blocked.get(entry as usize) {
            if self.blocker[node as usize] == blocker {
                self.enqueue(node);
            }
            entry = next;
        }
    }

    fn enqueue(&mut self, node: u32) {
        self.queued_at[node as usize] = self.queue.len() as u32;
        self.queue.push(node);
    }
}
