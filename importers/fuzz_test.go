package importers

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"tickdrawer/inventory"
)

func FuzzRead(f *testing.F) {
	for _, seed := range []string{
		"kind,value,quantity\nR,4k7,100\n",
		"\uFEFFArt;Wert;Menge;Preis\r\nWiderstand;4,7k;-5;1,234\r\n\r\nSumme;;5;\r\n",
		"\xFF\xFEk\x00i\x00n\x00d\x00,\x00q\x00t\x00y\x00,\x00p\x00n\x00\n\x00D\x00,\x001\x00,\x001\x00N\x00",
		"preamble\n\nkind\tvalue\tquantity\tnote\rC\t104K\t1\t\"a\r\"\"b\"\r",
		"reason|type|value (nF)|qty|what\nline 2: x|C|4,7|0|'=1+1\n",
		"sep=^\nkind^value^qty\nR^R47^1.000\n",
		"qty,value,note\n1,4k7Ω,\"unclosed\n",
		"kind,value,quantity,note\nR,1k,1,\"=\"\"\"\n",
		"kind,part no,qty,cost,tol,measured,tcr,vf,is\nD,1N4148,5,$0.01,5%,,0±30,0.7,2n\nD,=,5,\xA4,,,,,\n",
	} {
		f.Add([]byte(seed), false)
	}
	f.Fuzz(func(t *testing.T, content []byte, stocktake bool) {
		table, err := Read("f.csv", content, Options{Stocktake: stocktake})
		if err != nil {
			if !strings.HasPrefix(err.Error(), "f.csv: ") || inventory.ReasonOf(err) != inventory.Invalid || strings.Contains(err.Error(), "\n") {
				t.Errorf("error %q", err)
			}
			return
		}
		checkEveryLineIsAccountedFor(t, table, content)
		checkReceipts(t, table, stocktake)
		checkRejectsComeBack(t, table, stocktake)
	})
}

// checkEveryLineIsAccountedFor counts the lines with text anew and looks for
// each among rows, rejected rows, skips and the headings.
func checkEveryLineIsAccountedFor(t *testing.T, table Table, content []byte) {
	text, err := decode(content, "")
	if err != nil {
		t.Fatal(err)
	}
	var want []int
	lines := newDelimited(text.text, string(table.Delimiter))
	for {
		rec, err := lines.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if !rec.blank() {
			want = append(want, rec.line)
		}
	}
	got := []int{table.HeadingLine}
	for _, row := range slices.Concat(table.Rows, table.Rejected) {
		got = append(got, row.Line)
	}
	for _, skip := range table.Skipped {
		if skip.Reason == "" {
			t.Errorf("line %d is skipped without a reason", skip.Line)
		}
		got = append(got, skip.Line)
	}
	slices.Sort(got)
	if !slices.Equal(got, want) {
		t.Errorf("lines %v, want %v", got, want)
	}
	if last := got[len(got)-1]; last > 1+lineEnds(text.text) {
		t.Errorf("line %d lies beyond the text", last)
	}
	rejected := map[int]bool{}
	for _, row := range table.Rejected {
		rejected[row.Line] = true
	}
	for _, p := range table.Problems {
		if !rejected[p.Line] || p.Reason == "" || p.Number > 0 && p.Number <= len(table.Columns) && p.Column != table.Columns[p.Number-1].Heading {
			t.Errorf("problem %+v", p)
		}
	}
	for _, row := range table.Rejected {
		if !slices.ContainsFunc(table.Problems, func(p Problem) bool { return p.Line == row.Line }) {
			t.Errorf("line %d is rejected without a problem", row.Line)
		}
	}
}

// checkReceipts checks that every receipt can be booked.
func checkReceipts(t *testing.T, table Table, stocktake bool) {
	for _, row := range table.Rows {
		r := row.Receipt
		if r.Quantity < 0 || r.Quantity == 0 && !stocktake || r.Quantity > MaxPieces || r.Measured < 0 || r.UnitCost != nil && *r.UnitCost < 0 {
			t.Errorf("line %d: %+v", row.Line, r)
		}
		part, err := inventory.NewPart(r.Part)
		if err != nil || part.Key() != r.Part.Key() {
			t.Errorf("line %d: %+v is no sound part: %v", row.Line, r.Part, err)
		}
	}
}

// checkRejectsComeBack reads the rejects and wants the same cells again. Which
// of them are refused may differ: a currency is held against earlier rows.
func checkRejectsComeBack(t *testing.T, table Table, stocktake bool) {
	if len(table.Rejected) == 0 {
		return
	}
	written := Rejects(table)
	again, err := Read("f.csv", written, Options{Stocktake: stocktake, Delimiter: table.Delimiter})
	if err != nil {
		t.Fatalf("%v\n%q", err, written)
	}
	older := 0 // cells of the column that an earlier import added
	if table.Columns[0].Field == fieldReason {
		older = 1
	}
	rows := slices.Concat(again.Rows, again.Rejected)
	slices.SortFunc(rows, func(a, b Row) int { return a.Line - b.Line })
	if len(rows) != len(table.Rejected) {
		t.Fatalf("%d rows, want %d\n%q", len(rows), len(table.Rejected), written)
	}
	for i, row := range rows {
		if want := table.Rejected[i].Cells[older:]; !slices.Equal(row.Cells[1:], want) {
			t.Errorf("cells %q, want %q\n%q", row.Cells[1:], want, written)
		}
	}
}

func FuzzCells(f *testing.F) {
	for _, seed := range []string{"100 pcs", "1.000", "1 000,5", "0,012 €", "Fr. 5", "$.05", "±100 ppm/K", "0±30", "1'234'567.89", "-5", "R47", "4n7F", `="0805"`, "'=1", "½ W", "Total: 150"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, cell string) {
		if pieces, err := countOf(cell, true); err == nil {
			if again, err := countOf(strconv.FormatInt(pieces, 10), true); err != nil || again != pieces || pieces < 0 || pieces > MaxPieces {
				t.Errorf("countOf(%q) = %d, and of that %d, %v", cell, pieces, again, err)
			}
		}
		if cost, currency, err := costOf(cell); err == nil {
			again, _, err := costOf(fmt.Sprintf("%d.%06d", cost/1_000_000, cost%1_000_000))
			if err != nil || again != cost || cost < 0 {
				t.Errorf("costOf(%q) = %d %s, and of that %d, %v", cell, cost, currency, again, err)
			}
		}
		if ppm, err := tempcoOf(cell); err == nil && (math.IsNaN(ppm) || math.Abs(ppm) > 1e6) {
			t.Errorf("tempcoOf(%q) = %g", cell, ppm)
		}
		for _, unit := range []string{"V", "W", "A", "", "ohm"} {
			if x, err := positive(cell, unit); err == nil && !(x > 0 && x <= math.MaxFloat64) {
				t.Errorf("positive(%q, %q) = %g", cell, unit, x)
			}
		}
		if kind := kindOfUnit(cell); kind != "" && kind.Unit() == "" {
			t.Errorf("kindOfUnit(%q) = %s", cell, kind)
		}
		if again := unguarded(guarded(cell)); again != cell {
			t.Errorf("unguarded(guarded(%q)) = %q", cell, again)
		}
		if guarded(cell) == cell && runs(cell) && !plainNumber(cell) {
			t.Errorf("guarded(%q) may run as a formula", cell)
		}
		saysTotal(cell)
		figure(cell)
		(headingReader{}).column(cell)
		nearestField(cell)
	})
}
