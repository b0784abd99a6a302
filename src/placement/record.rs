//! The record of a search: the tree of bisections with the reason why each leaf was dropped.

use super::climb::SettledDisc;
use super::piece::Weighted;

/// Why a piece needs no more work.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Leaf {
    /// Rows and weights that bound it.
    Bounded([Weighted; 3]),
    /// Inside the settled disc with this index.
    Settled(u32),
    /// Outside the region.
    Outside,
    /// All corners on the boundary, and no centre farther from them than the radius found.
    NearCorners,
}

#[derive(Clone, Copy, Debug)]
pub(super) enum Node {
    Open,
    Split([u32; 2]),
    Leaf(Leaf),
}

/// Nodes of the bisection trees; the roots come first, in the order of the cover.
#[derive(Clone, Debug)]
pub(super) struct Record {
    nodes: Vec<Node>,
    n_roots: usize,
    discs: Vec<SettledDisc>,
}

impl Record {
    pub fn new(n_roots: usize) -> Record {
        Record {
            nodes: vec![Node::Open; n_roots],
            n_roots,
            discs: Vec::new(),
        }
    }

    /// Turns a node into a bisection and gives its halves' nodes.
    pub fn split(&mut self, node: u32) -> [u32; 2] {
        let first = self.nodes.len() as u32;
        self.nodes.extend([Node::Open; 2]);
        self.nodes[node as usize] = Node::Split([first, first + 1]);
        [first, first + 1]
    }

    pub fn leaf(&mut self, node: u32, leaf: Leaf) {
        self.nodes[node as usize] = Node::Leaf(leaf);
    }

    pub fn disc(&mut self, disc: &SettledDisc) {
        self.discs.push(*disc);
    }

    pub fn discs(&self) -> &[SettledDisc] {
        &self.discs
    }

    /// The nodes in preorder: root after root, a bisection before its first half, that before the second.
    pub fn preorder(&self) -> Vec<Node> {
        let mut order = Vec::with_capacity(self.nodes.len());
        let mut open: Vec<u32> = (0..self.n_roots as u32).rev().collect();
        while let Some(i) = open.pop() {
            let node = self.nodes[i as usize];
            if let Node::Split([first, second]) = node {
                open.extend([second, first]);
            }
            order.push(node);
        }
        order
    }
}
