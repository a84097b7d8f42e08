//! Rooted trees: each stands for one elementary differential of the solution, and so for one order condition.
//!
//! Source: Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.2; Butcher (2016), ch. 3.

use std::sync::LazyLock;

use num_bigint::BigInt;

/// Highest order of a tree in the table: enough to show that a scheme has order 8 and not 9.
pub(super) const HIGHEST: u32 = 9;

/// A rooted tree.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Tree {
    /// Number of vertices.
    pub(super) order: u32,
    /// The subtrees above the root by their place in the table, in falling order; each stands before this tree.
    pub(super) children: Vec<usize>,
    /// Density: the condition is that the elementary weight is `1 / gamma`.
    pub(super) gamma: BigInt,
    /// Symmetry: the number of ways to map the tree onto itself.
    pub(super) sigma: BigInt,
}

static TREES: LazyLock<Vec<Tree>> = LazyLock::new(grow);

/// All trees of orders 1 to [`HIGHEST`], by order.
pub(super) fn trees() -> &'static [Tree] {
    &TREES
}

fn grow() -> Vec<Tree> {
    let mut trees = Vec::new();
    for order in 1..=HIGHEST {
        let mut forests = Vec::new();
        gather(&trees, order - 1, trees.len(), &mut Vec::new(), &mut forests);
        let grown: Vec<Tree> = forests.into_iter().map(|children| join(&trees, order, children)).collect();
        trees.extend(grown);
    }
    trees
}

/// All forests with so many vertices of trees that stand before `end`, added to `chosen`.
fn gather(trees: &[Tree], vertices: u32, end: usize, chosen: &mut Vec<usize>, forests: &mut Vec<Vec<usize>>) {
    if vertices == 0 {
        forests.push(chosen.clone());
        return;
    }
    for (place, tree) in trees.iter().enumerate().take(end) {
        if tree.order <= vertices {
            chosen.push(place);
            gather(trees, vertices - tree.order, place + 1, chosen, forests);
            chosen.pop();
        }
    }
}

/// The tree whose root carries these subtrees.
fn join(trees: &[Tree], order: u32, children: Vec<usize>) -> Tree {
    let mut gamma = BigInt::from(order);
    let mut sigma = BigInt::from(1);
    let mut alike = 0;
    for (i, &child) in children.iter().enumerate() {
        gamma *= &trees[child].gamma;
        // The k-th of equal subtrees adds a factor k: they may change places.
        alike = if i > 0 && children[i - 1] == child { alike + 1 } else { 1 };
        sigma *= &trees[child].sigma * alike;
    }
    Tree { order, children, gamma, sigma }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    #[test]
    fn there_are_as_many_trees_as_in_the_published_count() {
        // Hairer, Nørsett & Wanner I (2nd ed. 1993), table II.2.1; order 9: Butcher (2016), table 3.1 (from memory).
        let counts = [1, 1, 2, 4, 9, 20, 48, 115, 286];
        for (order, count) in (1..).zip(counts) {
            assert_eq!(trees().iter().filter(|tree| tree.order == order).count(), count, "order {order}");
        }
    }

    #[test]
    fn no_tree_is_listed_twice() {
        let different: BTreeSet<_> = trees().iter().map(|tree| &tree.children).collect();
        assert_eq!(different.len(), trees().len());
    }

    #[test]
    fn labellings_of_all_trees_sum_to_a_factorial() {
        // alpha = order! / (gamma sigma) labellings a tree; all of order n together (n - 1)!: the number of
        // ways to grow a labelled tree vertex by vertex. Hairer, Nørsett & Wanner I, sect. II.2.
        let mut factorial = BigInt::from(1);
        for order in 1..=HIGHEST {
            let whole = &factorial * order;
            let alphas = trees().iter().filter(|tree| tree.order == order).map(|tree| {
                let product = &tree.gamma * &tree.sigma;
                assert_eq!(&whole % &product, BigInt::ZERO);
                &whole / product
            });
            assert_eq!(alphas.sum::<BigInt>(), factorial, "order {order}");
            factorial = whole;
        }
    }
}
