package importers_test

import (
	"fmt"

	"tickdrawer/importers"
)

func ExampleRead() {
	table, err := importers.Read("stock.csv", []byte(`Bestand im Mai
Art;Wert;Menge;Fach;Farbe
Widerstand;4,7k;100;A1;rot
Kondensator;470;20;B2;
Summe;;120;;
`), importers.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(table.Detected)
	for _, row := range table.Rows {
		r := row.Receipt
		fmt.Printf("line %d: %d × %s into %s (%s)\n", row.Line, r.Quantity, r.Part.Name(), r.Bin, r.Note)
	}
	for _, p := range table.Problems {
		fmt.Println(p)
	}
	for _, s := range table.Skipped {
		fmt.Printf("line %d skipped: %s\n", s.Line, s.Reason)
	}
	fmt.Print(string(importers.Rejects(table)))
	// Output:
	// delimiter ";", utf-8, headings on line 2
	// line 3: 100 × 4.7 kΩ into A1 (Farbe: rot)
	// stock.csv, line 4, column 2 "Wert", "470": 470 could be 47 pF (three-digit code) or 470 pF (plain number); write 47p or 470p
	// line 1 skipped: before the headings
	// line 5 skipped: a total
	// reason;Art;Wert;Menge;Fach;Farbe
	// "line 4: Wert: 470 could be 47 pF (three-digit code) or 470 pF (plain number); write 47p or 470p";Kondensator;470;20;B2;
}
