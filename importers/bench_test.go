package importers

import (
	"fmt"
	"strings"
	"testing"
)

// stockList returns a list of so many rows as workshops keep them.
func stockList(rows int) []byte {
	kinds := []string{
		"Widerstand;4,7k;1%%;%d;A%d;;1/4W;0,012 €;Metallschicht\n",
		"C;100nF;±10 %%;%d;B%d;50V;;0,03 €;X7R, Raster 5\n",
		"diode;1N4148;;%d;C%d;100 V;;0,02 €;\n",
		"resistor;R47;5%%;%d pcs;D%d;;0.5W;;\"old stock, \"\"box\"\"\"\n",
	}
	var text strings.Builder
	text.WriteString("Art;Wert;Toleranz;Menge;Fach;Spannung;Leistung;Preis;Bemerkung\n")
	for i := range rows {
		fmt.Fprintf(&text, kinds[i%len(kinds)], 1+i%900, i%60)
	}
	return []byte(text.String())
}

// The bound to work against: 100,000 rows in under 3 s with the booking.
func BenchmarkRead100000Rows(b *testing.B) {
	content := stockList(100_000)
	b.SetBytes(int64(len(content)))
	b.ReportAllocs()
	for b.Loop() {
		table, err := Read("stock.csv", content, Options{})
		if err != nil || len(table.Rows) != 100_000 {
			b.Fatalf("%d rows, %v, %v", len(table.Rows), err, table.Problems[:min(3, len(table.Problems))])
		}
	}
}
