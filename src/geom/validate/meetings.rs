//! Pairs of segments that come near each other, found by boxes.
//!
//! Method: few segments are compared each with each. Otherwise a binary tree of bounding boxes is laid over the segments in
//! the order they run, which needs no sorting since neighbours in a ring are neighbours in the plane, and the tree is
//! joined with itself.

use super::super::{Bounds, Segment};

/// Up to this many segments are compared each with each: 300 comparisons cost about as much as building the tree.
const FEW: usize = 24;
/// Segments in a leaf: smaller ones make the tree costlier than the comparisons it saves.
const LEAF: usize = 6;

/// Calls `visit` with the indices, the lower first, of every two segments whose boxes overlap, until it says stop (false).
pub(super) fn near_pairs(segments: &[Segment], visit: &mut dyn FnMut(usize, usize) -> bool) {
    let n = segments.len();
    if n <= FEW {
        for i in 0..n {
            for j in i + 1..n {
                if boxes_overlap(segments[i], segments[j]) && !visit(i, j) {
                    return;
                }
            }
        }
        return;
    }
    let n_leaves = n.div_ceil(LEAF).next_power_of_two();
    let mut boxes = vec![Bounds::EMPTY; 2 * n_leaves];
    for (leaf, run) in segments.chunks(LEAF).enumerate() {
        boxes[n_leaves + leaf] = Bounds::of(run.iter().flat_map(|s| [s.a, s.b]));
    }
    for node in (1..n_leaves).rev() {
        // Leaves are filled from the left, so where the right child is empty the left one is all there is.
        let (left, right) = (boxes[2 * node], boxes[2 * node + 1]);
        boxes[node] = if right.is_empty() {
            left
        } else {
            left.union(right)
        };
    }
    let tree = Tree {
        segments,
        boxes,
        n_leaves,
    };
    // Node 1 is the root; the children of node k are 2k and 2k + 1.
    let mut open = vec![(1, 1)];
    while let Some((a, b)) = open.pop() {
        if !tree.boxes[a].overlaps(tree.boxes[b]) {
            continue;
        }
        if a >= n_leaves {
            if !tree.compare_leaves(a, b, visit) {
                return;
            }
        } else if a == b {
            open.extend([(2 * a + 1, 2 * a + 1), (2 * a, 2 * a + 1), (2 * a, 2 * a)]);
        } else {
            // Both are on one level, so both have children.
            open.extend([
                (2 * a + 1, 2 * b + 1),
                (2 * a + 1, 2 * b),
                (2 * a, 2 * b + 1),
                (2 * a, 2 * b),
            ]);
        }
    }
}

struct Tree<'a> {
    segments: &'a [Segment],
    boxes: Vec<Bounds>,
    n_leaves: usize,
}

impl Tree<'_> {
    fn run(&self, leaf: usize) -> std::ops::Range<usize> {
        let start = (leaf - self.n_leaves) * LEAF;
        start..(start + LEAF).min(self.segments.len())
    }

    /// False when `visit` said stop.
    fn compare_leaves(
        &self,
        a: usize,
        b: usize,
        visit: &mut dyn FnMut(usize, usize) -> bool,
    ) -> bool {
        for i in self.run(a) {
            let others = self.run(b);
            let from = if a == b { i + 1 } else { others.start };
            for j in from..others.end {
                if boxes_overlap(self.segments[i], self.segments[j]) && !visit(i, j) {
                    return false;
                }
            }
        }
        true
    }
}

fn boxes_overlap(s: Segment, t: Segment) -> bool {
    let apart = |a: f64, b: f64, c: f64, d: f64| a.max(b) < c.min(d) || c.max(d) < a.min(b);
    !apart(s.a.x, s.b.x, t.a.x, t.b.x) && !apart(s.a.y, s.b.y, t.a.y, t.b.y)
}
