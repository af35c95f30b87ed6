//! Readings that are compared only among themselves: those of one place, one season, one person.

/// Which block each reading belongs to.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Blocks {
    labels: Vec<String>,
    of: Vec<u32>,
}

impl Blocks {
    /// Blocks from one label a reading, numbered in the order in which they first occur.
    pub fn of_labels<S: AsRef<str>>(labels: impl IntoIterator<Item = S>) -> Self {
        let mut known: Vec<String> = Vec::new();
        let mut places = std::collections::HashMap::new();
        let of = labels
            .into_iter()
            .map(|label| {
                *places.entry(label.as_ref().to_owned()).or_insert_with(|| {
                    known.push(label.as_ref().to_owned());
                    known.len() as u32 - 1
                })
            })
            .collect();
        Blocks { labels: known, of }
    }

    /// The block of a reading, counted from 0.
    pub fn block(&self, index: usize) -> usize {
        self.of[index] as usize
    }

    /// How many blocks there are.
    pub fn count(&self) -> usize {
        self.labels.len()
    }

    /// How many readings there are.
    pub fn len(&self) -> usize {
        self.of.len()
    }

    /// Whether there are no readings.
    pub fn is_empty(&self) -> bool {
        self.of.is_empty()
    }

    /// The label of a block.
    pub fn label(&self, block: usize) -> &str {
        &self.labels[block]
    }

    /// The readings of each block, as indices in time order.
    pub fn members(&self) -> Vec<Vec<usize>> {
        let mut members = vec![Vec::new(); self.count()];
        for (index, &block) in self.of.iter().enumerate() {
            members[block as usize].push(index);
        }
        members
    }
}
