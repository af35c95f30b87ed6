//! Blocks of readings that are ranked among themselves, each with one reading at every moment.

use std::cmp::Ordering;

use super::groups::places;
use crate::reading::moment::MomentKind;
use crate::reading::{Blocks, Series};

/// One block: a place, person or season with one reading at every moment.
#[derive(Clone, Debug, PartialEq)]
pub struct RankedBlock {
    /// Its label.
    pub label: String,
    /// The index of its reading at each moment, in time order.
    pub readings: Vec<usize>,
    /// Twice the rank of each of these readings in the block, ties sharing the mean of their ranks.
    pub double_ranks: Vec<u32>,
}

/// All complete blocks of a series.
#[derive(Clone, Debug, PartialEq)]
pub struct RankedBlocks {
    /// The label of each moment, in time order.
    pub moments: Vec<String>,
    /// The complete blocks.
    pub blocks: Vec<RankedBlock>,
    /// How many blocks lack a reading at some moment.
    pub incomplete: usize,
}

/// Why readings make no blocks.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum BlockError {
    /// No blocks were sent.
    #[error(
        "the readings come in no blocks; send a range with one row a moment and one column a block, or a block for each reading"
    )]
    NoBlocks,
    /// Two readings of one block at one moment.
    #[error("block {block} has more than one reading at moment {moment}; this test takes one")]
    Repeated { block: String, moment: String },
}

impl RankedBlocks {
    /// Ranks the readings of each block. Without moments, the first reading of every block belongs to the first moment,
    /// and so on. Readings whose order is not certain share ranks.
    ///
    /// # Errors
    /// There are no blocks, or a block has two readings at one moment.
    pub fn of(series: &Series) -> Result<Self, BlockError> {
        let blocks = series.blocks.as_ref().ok_or(BlockError::NoBlocks)?;
        let members = blocks.members();
        let places = match series.moments.kind() {
            MomentKind::Position => places_in_block(blocks, &members),
            _ => places(series),
        };
        let count = places.iter().max().map_or(0, |last| last + 1);
        let mut ranked = RankedBlocks { moments: vec![String::new(); count], blocks: Vec::new(), incomplete: 0 };
        for (index, &place) in places.iter().enumerate() {
            if ranked.moments[place].is_empty() {
                ranked.moments[place] = match series.moments.kind() {
                    MomentKind::Position => (place + 1).to_string(),
                    _ => series.moments.label(index),
                };
            }
        }
        for (block, members) in members.iter().enumerate() {
            let mut at: Vec<Option<usize>> = vec![None; count];
            for &index in members.iter().filter(|&&index| !series.values[index].is_missing()) {
                if at[places[index]].replace(index).is_some() {
                    let (block, moment) = (blocks.label(block).to_owned(), ranked.moments[places[index]].clone());
                    return Err(BlockError::Repeated { block, moment });
                }
            }
            match at.into_iter().collect::<Option<Vec<usize>>>() {
                Some(readings) => ranked.blocks.push(RankedBlock {
                    label: blocks.label(block).to_owned(),
                    double_ranks: double_ranks(series, &readings),
                    readings,
                }),
                None => ranked.incomplete += 1,
            }
        }
        Ok(ranked)
    }
}

fn places_in_block(blocks: &Blocks, members: &[Vec<usize>]) -> Vec<usize> {
    let mut places = vec![0; blocks.len()];
    for members in members {
        for (place, &index) in members.iter().enumerate() {
            places[index] = place;
        }
    }
    places
}

/// Twice the rank: one more than the number of readings, plus those certainly below, less those certainly above.
fn double_ranks(series: &Series, readings: &[usize]) -> Vec<u32> {
    let sign = |a: usize, b: usize| match series.values[b].compare(series.values[a]) {
        Some(Ordering::Less) => 1,
        Some(Ordering::Greater) => -1,
        _ => 0,
    };
    let double_rank = |&a: &usize| readings.len() as i64 + 1 + readings.iter().map(|&b| sign(a, b)).sum::<i64>();
    readings.iter().map(|index| double_rank(index) as u32).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::reading::{Missing, Value};

    #[test]
    fn blocks_are_ranked_by_themselves() {
        let mut series = Series::of_numbers(&[1.5, 9.0, 2.5, 9.0, 2.0, 7.0]);
        series.blocks = Some(Blocks::of_labels(["a", "b", "a", "b", "a", "b"]));
        let ranked = RankedBlocks::of(&series).unwrap();
        assert_eq!(ranked.moments, ["1", "2", "3"]);
        assert_eq!(ranked.blocks[0].double_ranks, [2, 6, 4]);
        assert_eq!(ranked.blocks[1].double_ranks, [5, 5, 2]);
        series.values[2] = Value::Missing(Missing::Blank);
        let ranked = RankedBlocks::of(&series).unwrap();
        assert_eq!((ranked.blocks.len(), ranked.incomplete), (1, 1));
    }
}
