// Package migrations carries the drawer's schema as numbered SQL files. A drawer
// is brought up to date one file at a time, each in its own transaction; a file
// that has been released is never edited, a change is a new number.
package migrations

import "embed"

// FS holds the SQL files.
//
//go:embed *.sql
var FS embed.FS
