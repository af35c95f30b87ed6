//! Runs: neighbours of one kind.

/// A run of neighbours of one kind.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Run<K> {
    /// What its members have in common.
    pub kind: K,
    /// Index of the reading at which it begins.
    pub first: usize,
    /// Index of the reading at which it ends.
    pub last: usize,
    /// How many members it has.
    pub length: usize,
}

/// The runs among members in time order. Each member begins and ends at a reading and has a kind.
pub fn runs<K: Copy + PartialEq>(members: impl IntoIterator<Item = (usize, usize, K)>) -> Vec<Run<K>> {
    let mut runs: Vec<Run<K>> = Vec::new();
    for (first, last, kind) in members {
        match runs.last_mut() {
            Some(run) if run.kind == kind => {
                run.last = last;
                run.length += 1;
            }
            _ => runs.push(Run { kind, first, last, length: 1 }),
        }
    }
    runs
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_change_of_kind_begins_a_run() {
        let runs = runs([(0, 0, 'a'), (1, 1, 'a'), (4, 4, 'b'), (5, 5, 'a')]);
        let seen: Vec<_> = runs.iter().map(|run| (run.kind, run.first, run.last, run.length)).collect();
        assert_eq!(seen, [('a', 0, 1, 2), ('b', 4, 4, 1), ('a', 5, 5, 1)]);
    }
}
