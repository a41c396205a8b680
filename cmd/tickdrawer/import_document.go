package main

import "tickdrawer/importers"

// rejectedDocument is a row that cannot be booked: the first thing that is wrong
// with it, and whatever else is.
type rejectedDocument struct {
	Line int `json:"line"`
	problemDocument
	Further []problemDocument `json:"further,omitempty"`
}

type problemDocument struct {
	Column string `json:"column"`
	Value  string `json:"value"`
	Reason string `json:"reason"`
}

// documentsOfProblems returns an entry for each row, in the order of the file.
func documentsOfProblems(problems []importers.Problem) []rejectedDocument {
	rows := []rejectedDocument{}
	for _, problem := range problems {
		document := problemDocument{problem.Column, problem.Value, problem.Reason}
		if last := len(rows) - 1; last >= 0 && rows[last].Line == problem.Line {
			rows[last].Further = append(rows[last].Further, document)
			continue
		}
		rows = append(rows, rejectedDocument{Line: problem.Line, problemDocument: document})
	}
	return rows
}

type importedFileDocument struct {
	File     string             `json:"file"`
	Rows     int                `json:"rows"`
	Booked   int                `json:"booked"`
	Rejected []rejectedDocument `json:"rejected"`
	Detected string             `json:"detected"`
	Rejects  string             `json:"rejects,omitempty"` // the file that --skip-bad wrote
}

type importDocument struct {
	Files          []importedFileDocument `json:"files"`
	LotsCreated    int                    `json:"lots_created"`
	QuantityBooked int64                  `json:"quantity_booked"`
	DryRun         bool                   `json:"dry_run"`
}

// documentOfImport returns what was read of the files.
func documentOfImport(files []string, tables []importers.Table, dryRun bool) importDocument {
	document := importDocument{Files: []importedFileDocument{}, DryRun: dryRun}
	for i, table := range tables {
		document.Files = append(document.Files, importedFileDocument{
			File: files[i], Rows: table.RowCount(), Booked: len(table.Rows), Rejected: documentsOfProblems(table.Problems), Detected: table.Detected,
		})
	}
	return document
}
