// Package testdata carries the demo's invented drawer and job, so that the
// program can unpack them wherever it runs.
package testdata

import "embed"

// Demo holds the folder demo: parts lists in CSV, and a job.
//
//go:embed demo
var Demo embed.FS
