// Package inventory is the drawer in plain Go types and the rules they keep: a
// Part is a kind of component, a Lot is a quantity of one part in one bin, a
// Movement books pieces in or out, a Kit holds or takes pieces for a job.
//
// Nothing here reads a file, a clock or a database. Quantities are whole pieces;
// values are SI base units (ohm, farad, volt, watt, degree Celsius); money is
// counted in millionths so that sums are exact.
package inventory
