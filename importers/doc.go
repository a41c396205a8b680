// Package importers turns somebody's file into rows of ours, with every problem
// named by line and column. It knows tables and words, not the drawer: nothing
// here speaks SQL, and nothing is booked here.
//
// Read goes through a file in four steps, each in its own file:
//
//	encoding.go   bytes → text: UTF-8, UTF-16, Windows-1252
//	delimited.go  text → cells by RFC 4180; which delimiter; which line has the headings
//	mapping.go    headings → fields; the words it knows are in headings.go
//	receipt.go    cells → a receipt, or all that is wrong with the row; the
//	              notations of single cells are in cells.go
//
// What was detected is said in Table.Detected. Nothing is dropped in silence: a
// line is a row, a rejected row with its problems, or a skip with its reason; a
// column that is not recognised goes into the note.
//
// Rejects writes the rejected rows for mending and importing again.
package importers
