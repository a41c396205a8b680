// Package optimize holds what is asked of a timer network and what is answered:
// the Spec with its requirements and allowances, the Fit that meets it, and the
// Front of fits that nothing beats. The packages below it share these types:
// timer (physics), network (series/parallel combinations), spread (worst case),
// search (one stage), allot (many boards and stages), picks (documents).
//
// Quantities are SI base units; a name ends in its unit.
package optimize
