// Package search finds the fits of one stage, exactly: every series/parallel
// network of stocked parts in every position of every circuit that suits, by
// branch and bound.
//
// The networks of a position lie in tables sorted by value, one for each number
// of parts. A phase time rises or falls with each position (timer.Trend), so two
// corners bound it over any span of rows; a span whose bounds cannot meet the
// spec, or cannot join the answer that stands, is dropped whole, else halved.
// Bounds are widened outward by more than their rounding, so that nothing is
// lost; what ties within the rounding is decided by a total order.
package search
