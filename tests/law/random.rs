//! A small repeatable generator, so that every run sees the same inputs.

/// G. L. Steele, D. Lea and C. H. Flood (2014), Fast splittable pseudorandom number generators, OOPSLA, 453-472.
pub struct Random(u64);

impl Random {
    pub fn seeded(seed: u64) -> Self {
        Random(seed)
    }

    pub fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// Uniform between 0 and 1, neither end included.
    pub fn uniform(&mut self) -> f64 {
        ((self.next() >> 12) as f64 + 0.5) / (1_u64 << 52) as f64
    }

    /// A whole number from 0 to `below` - 1.
    pub fn whole(&mut self, below: usize) -> usize {
        (self.uniform() * below as f64) as usize
    }

    pub fn shuffle<T>(&mut self, list: &mut [T]) {
        for last in (1..list.len()).rev() {
            list.swap(last, self.whole(last + 1));
        }
    }

    /// A Poisson count with a small mean, by multiplying uniforms.
    pub fn poisson(&mut self, mean: f64) -> f64 {
        let (limit, mut product, mut count) = ((-mean).exp(), self.uniform(), 0.0);
        while product > limit {
            product *= self.uniform();
            count += 1.0;
        }
        count
    }
}
