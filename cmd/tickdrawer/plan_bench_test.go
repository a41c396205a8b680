package main

import (
	"context"
	"io/fs"
	"strings"
	"testing"

	"tickdrawer/importers"
	"tickdrawer/inventory"
	"tickdrawer/optimize/allot"
	"tickdrawer/testdata"
)

// demoLots returns the demo's lots, in the order of its files.
func demoLots(tb testing.TB) []inventory.Lot {
	tb.Helper()
	entries, err := fs.ReadDir(testdata.Demo, "demo")
	if err != nil {
		tb.Fatal(err)
	}
	var lots []inventory.Lot
	for _, entry := range entries {
		if !strings.HasSuffix(entry.Name(), ".csv") {
			continue
		}
		content, err := fs.ReadFile(testdata.Demo, "demo/"+entry.Name())
		if err != nil {
			tb.Fatal(err)
		}
		table, err := importers.Read(entry.Name(), content, importers.Options{})
		if err != nil {
			tb.Fatal(err)
		}
		for _, row := range table.Rows {
			r := row.Receipt
			lots = append(lots, inventory.Lot{
				ID: inventory.LotID(len(lots) + 1), Part: r.Part, Bin: r.Bin, Measured: r.Measured, UnitCost: r.UnitCost, OnHand: r.Quantity,
			})
		}
	}
	return lots
}

func BenchmarkDemoPlan(b *testing.B) {
	lots := demoLots(b)
	content, err := fs.ReadFile(testdata.Demo, "demo/harbour.yaml")
	if err != nil {
		b.Fatal(err)
	}
	parsed, err := allot.ParseJob("harbour.yaml", content)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		plan, err := allot.Plan(context.Background(), parsed.Job, lots)
		if err != nil || plan.Built != 12 || !plan.Search.Proven {
			b.Fatal("the demo is not planned", err)
		}
	}
}
