//! All arrangements of a few readings, one by one: the obviously right version that the null distributions must agree with.

/// Visits every arrangement of readings of which `sizes[v]` have the value v.
pub fn for_each(sizes: &[usize], mut visit: impl FnMut(&[usize])) {
    fn extend(left: &mut [usize], order: &mut Vec<usize>, visit: &mut dyn FnMut(&[usize])) {
        if left.iter().all(|&size| size == 0) {
            return visit(order);
        }
        for value in 0..left.len() {
            if left[value] > 0 {
                left[value] -= 1;
                order.push(value);
                extend(left, order, visit);
                order.pop();
                left[value] += 1;
            }
        }
    }
    extend(&mut sizes.to_vec(), &mut Vec::new(), &mut visit);
}

/// Group sizes of up to `most` readings: every composition of the small totals, and a choice of the larger ones.
pub fn sizes_to_try(most: usize) -> Vec<Vec<usize>> {
    let mut tried = Vec::new();
    for total in 2..=most {
        for cuts in 0..1_u32 << (total - 1) {
            let mut sizes = vec![1];
            for at in 0..total - 1 {
                if cuts >> at & 1 == 1 {
                    sizes.push(1)
                } else if let Some(last) = sizes.last_mut() {
                    *last += 1
                }
            }
            let all_different = sizes.len() == total;
            if sizes.len() > 1 && (total < 7 || all_different || (cuts * 7 + 3) % 11 == 0) {
                tried.push(sizes);
            }
        }
    }
    tried
}
