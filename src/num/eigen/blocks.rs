//! Which indices of a matrix belong together: its pattern of zeros, read as a graph, in strongly connected parts.
//!
//! A matrix ordered by these parts is block triangular, so its eigenvalues are those of the blocks, exactly. At the border
//! of a community that is the rule: an absent species' own row has its growth rate and nothing else.

/// The parts, in an order in which an entry (i, j) that is not 0 never has j in an earlier part than i; within a part the
/// indices rise. Two searches, along the arrows and against them (Kosaraju 1978; Sharir 1981).
pub(crate) fn strongly_connected(n: usize, linked: impl Fn(usize, usize) -> bool) -> Vec<Vec<usize>> {
    // Most matrices that are not small have no zero, and need no search.
    if n > 0 && (1..n).all(|i| linked(0, i) && linked(i, 0)) {
        return vec![(0..n).collect()];
    }
    let mut finished = Vec::with_capacity(n);
    let mut seen = vec![false; n];
    for start in 0..n {
        walk(start, &mut seen, &linked, &mut finished);
    }
    let against = |i: usize, j: usize| linked(j, i);
    let mut parts = Vec::new();
    let mut seen = vec![false; n];
    for &start in finished.iter().rev() {
        let mut part = Vec::new();
        walk(start, &mut seen, &against, &mut part);
        if !part.is_empty() {
            part.sort_unstable();
            parts.push(part);
        }
    }
    parts
}

/// Depth first from `start`; each index that was not seen yet, when all that it leads to is done. Keeps its own stack,
/// because a chain may be as long as the matrix.
fn walk(start: usize, seen: &mut [bool], linked: &impl Fn(usize, usize) -> bool, finished: &mut Vec<usize>) {
    if std::mem::replace(&mut seen[start], true) {
        return;
    }
    let mut stack = vec![(start, 0)];
    while let Some((i, from)) = stack.last_mut() {
        let i = *i;
        if let Some(j) = (*from..seen.len()).find(|&j| !seen[j] && linked(i, j)) {
            *from = j + 1;
            seen[j] = true;
            stack.push((j, 0));
        } else {
            finished.push(i);
            stack.pop();
        }
    }
}

#[cfg(test)]
mod tests {
    use super::strongly_connected;

    #[test]
    fn parts_by_hand() {
        let check = |n: usize, links: &[(usize, usize)], expected: &[&[usize]]| {
            let mut parts = strongly_connected(n, |i, j| links.contains(&(i, j)));
            let place = |i: usize| parts.iter().position(|part| part.contains(&i));
            assert!(links.iter().all(|&(i, j)| place(i) <= place(j)), "{parts:?}");
            parts.sort();
            assert_eq!(parts, expected, "{links:?}");
        };
        check(0, &[], &[]);
        check(2, &[], &[&[0], &[1]]);
        check(2, &[(1, 0)], &[&[0], &[1]]);
        check(2, &[(1, 0), (0, 1)], &[&[0, 1]]);
        // A ring with a tail in and a tail out.
        check(6, &[(0, 2), (2, 4), (4, 0), (5, 4), (2, 1), (3, 3)], &[&[0, 2, 4], &[1], &[3], &[5]]);
        check(4, &[(0, 1), (1, 0), (2, 3), (3, 2), (3, 0)], &[&[0, 1], &[2, 3]]);
    }

    #[test]
    fn a_long_chain_needs_no_deep_stack() {
        let ring = strongly_connected(2000, |i, j| (i + 1) % 2000 == j);
        assert_eq!(ring.len(), 1);
        let chain = strongly_connected(2000, |i, j| i + 1 == j);
        assert!(chain.iter().enumerate().all(|(k, part)| part[..] == [k]));
    }
}
