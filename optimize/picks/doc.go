// Package picks writes a plan as the documents that a builder takes to the
// drawer and to the bench: a workbook with the picks in walking order, a sheet
// per variant that says which part goes where and what to measure, the timing,
// what is short, and cautions; or the picks alone as CSV.
//
// The documents are returned as bytes and depend on the plan and the options
// alone: the same two give the same bytes.
package picks
