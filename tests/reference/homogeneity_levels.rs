// Made by homogeneity_levels.py with NumPy, 400000 series of normal readings for each size; do not edit.
// Readings, chance, and the value that T0 exceeds with that chance.
const HOMOGENEITY_LEVELS: [(usize, f64, f64); 18] = [
    (5, 0.1, 3.4089),
    (5, 0.05, 3.6222),
    (5, 0.01, 3.8688),
    (10, 0.1, 4.9670),
    (10, 0.05, 5.6348),
    (10, 0.01, 6.7678),
    (20, 0.1, 6.0795),
    (20, 0.05, 7.0896),
    (20, 0.01, 9.1016),
    (30, 0.1, 6.5875),
    (30, 0.05, 7.7406),
    (30, 0.01, 10.1731),
    (50, 0.1, 7.1514),
    (50, 0.05, 8.4370),
    (50, 0.01, 11.1920),
    (100, 0.1, 7.7811),
    (100, 0.05, 9.1492),
    (100, 0.01, 12.2502),
];
