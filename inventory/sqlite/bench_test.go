package sqlite

import (
	"fmt"
	"path/filepath"
	"strings"
	"testing"

	"tickdrawer/inventory"
)

// BenchmarkBook books 100,000 rows in one transaction: into new lots, into lots
// that are there, and into one lot with a note on every row.
func BenchmarkBook(b *testing.B) {
	const rows = 100_000
	for _, bench := range []struct {
		name string
		lots int
		note string
	}{{"a lot each", rows, ""}, {"1000 lots", 1000, ""}, {"a lot with notes", 1, "order "}} {
		b.Run(bench.name, func(b *testing.B) {
			receipts := make([]inventory.Receipt, rows)
			for i := range receipts {
				receipts[i] = inventory.Receipt{Part: ohms(b, float64(1+i%bench.lots)), Bin: fmt.Sprint(i % 50), Quantity: 10}
				if bench.note != "" {
					receipts[i].Bin, receipts[i].Note = "A1", fmt.Sprint(bench.note, i)
				}
			}
			for b.Loop() {
				d := open(b, filepath.Join(b.TempDir(), "stock.drawer"))
				if _, err := d.Book(b.Context(), Intake{Files: []IntakeFile{{Name: "rows.csv", SHA256: strings.Repeat("0", 64), Receipts: receipts}}}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
		})
	}
}

// BenchmarkVerify checks a ledger of 100,000 movements.
func BenchmarkVerify(b *testing.B) {
	const rows = 100_000
	d := fresh(b)
	receipts := make([]inventory.Receipt, rows)
	for i := range receipts {
		receipts[i] = inventory.Receipt{Part: ohms(b, float64(1+i%1000)), Quantity: 10}
	}
	book(b, d, Intake{Files: []IntakeFile{file("rows.csv", receipts...)}})
	for b.Loop() {
		wantSound(b, d)
	}
}
