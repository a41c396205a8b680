package marking

// Tolerance is how far a part's value may be from its nominal one, as fractions
// of it: ±5 % is {0.05, 0.05}, −20/+80 % is {0.20, 0.80}. Both are ≥ 0 and
// Minus < 1.
type Tolerance struct{ Minus, Plus float64 }
