// Package search finds the fits of one stage, exactly: every series/parallel
// network of stocked parts in every position of every circuit that suits, by
// branch and bound.
//
// The networks of a position lie in tables sorted by value, one for each number
// of parts and some range of costs. A choice of tables, one a position, is a
// class; classes are searched fewest parts first, then cheapest, so that what is
// found early leaves little of what follows. A phase time rises or falls with
// each resistor (timer.Trend) and is proportional to the capacitance, so two
// corners bound it over any span of rows. The spec and the best that stands
// leave a window for each phase; spans whose bounds miss it are dropped whole.
// Bounds are widened outward by more than their rounding, so that nothing is
// lost; what ties within the rounding is decided by a total order.
package search
