package importers

import (
	"fmt"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

// written is one receipt with the cells that state it.
type written struct {
	receipt inventory.Receipt
	cells   map[Field]string
}

// plainText draws texts that are kept as they are: spaced once, and neither a
// dash for nothing nor a spreadsheet's formula. All of it is in Windows-1252,
// where no two of the letters in a row are sound UTF-8 as ß° would be.
var plainText = rapid.Map(rapid.SliceOfN(rapid.SampledFrom([]string{
	"a", "Z", "7", " ", ",", ";", "|", `"`, "'", "=", "+", "-", "@", "µ", "€", "ü", "ö", ".", "\n", "\t", "/",
}), 1, 12), func(parts []string) string {
	return "x" + oneSpaced(strings.Join(parts, ""))
})

// drawReceipt draws a sound receipt and a way to write it.
func drawReceipt(t *rapid.T) written {
	w := written{cells: map[Field]string{}}
	part := &w.receipt.Part
	set := func(field Field, cell string) { w.cells[field] = cell }
	maybe := func(label string) bool { return rapid.Bool().Draw(t, label) }
	comma := func(number string) string {
		if maybe("comma") {
			return strings.Replace(number, ".", ",", 1)
		}
		return number
	}
	part.Kind = rapid.SampledFrom(inventory.Kinds()).Draw(t, "kind")
	set(FieldKind, rapid.SampledFrom([]string{string(part.Kind), strings.ToUpper(string(part.Kind)), " " + string(part.Kind) + "s"}).Draw(t, "kind as written"))

	if unit := part.Kind.Unit(); unit != "" {
		// An E24 value in decades that stand in one notation or another; the number
		// is the one that strconv reads from the plain decimal.
		mantissa := rapid.SampledFrom(marking.Preferred(24)).Draw(t, "mantissa")
		prefix := rapid.SampledFrom([]struct{ ohm, f, power string }{{"", "p", "-12"}, {"k", "n", "-9"}, {"M", "u", "-6"}}).Draw(t, "prefix")
		whole, fraction := mantissa/10, mantissa%10
		decimal := fmt.Sprintf("%d.%d", whole, fraction)
		power, symbol := prefix.power, prefix.f
		if unit == "ohm" {
			power, symbol = map[string]string{"": "0", "k": "3", "M": "6"}[prefix.ohm], prefix.ohm
		}
		part.Value, _ = strconv.ParseFloat(decimal+"e"+power, 64)
		cell := comma(decimal) + symbol
		if symbol != "" && maybe("letter as the point") {
			cell = fmt.Sprintf("%d%s%d", whole, symbol, fraction)
		} else if symbol == "" && maybe("R as the point") {
			cell = fmt.Sprintf("%dR%d", whole, fraction)
		}
		set(FieldValue, cell)
		if maybe("tolerance") {
			percent := rapid.SampledFrom([]int{1, 2, 5, 10, 20}).Draw(t, "percent")
			part.Tolerance = &marking.Tolerance{Minus: float64(percent) / 100, Plus: float64(percent) / 100}
			set(FieldTolerance, fmt.Sprintf(rapid.SampledFrom([]string{"%d%%", "±%d %%", "%d", "+/-%d%%"}).Draw(t, "tolerance as written"), percent))
		}
		if maybe("measured") {
			w.receipt.Measured, _ = strconv.ParseFloat(decimal+"1e"+power, 64)
			set(FieldMeasured, decimal+"1"+symbol)
		}
	}
	if part.Kind.Unit() == "" || maybe("part number") {
		number := plainText.Draw(t, "part number")
		part.PartNumber = strings.ToUpper(number)
		set(FieldPartNumber, number)
	}
	if maybe("rating V") {
		part.RatingV = 6.3
		set(FieldRatingV, comma("6.3")+rapid.SampledFrom([]string{"", "V", " V"}).Draw(t, "volt"))
	}
	if maybe("rating W") {
		part.RatingW = 0.25
		set(FieldRatingW, rapid.SampledFrom([]string{"1/4W", "0.25", "0,25 W", "250mW", "¼ W"}).Draw(t, "watt"))
	}
	if maybe("tempco") {
		ppm := float64(rapid.IntRange(-900, 900).Draw(t, "ppm"))
		part.TempcoPPM = &ppm
		set(FieldTempco, fmt.Sprintf("%g%s", ppm, rapid.SampledFrom([]string{"", " ppm", "ppm/K"}).Draw(t, "ppm as written")))
	}
	for _, text := range []struct {
		field Field
		to    *string
	}{{FieldBin, &w.receipt.Bin}, {FieldNote, &w.receipt.Note}, {FieldPackage, &part.Package}, {FieldDielectric, &part.Dielectric}} {
		if maybe(string(text.field)) {
			*text.to = plainText.Draw(t, string(text.field))
			set(text.field, *text.to)
		}
	}
	if part.Kind == inventory.Diode && maybe("model") {
		part.ForwardV, part.SaturationA, part.Ideality, part.SeriesOhm = 0.7, 2.52e-9, 1.75, 0.568
		set(FieldForwardV, comma("0.7"))
		set(FieldSaturationA, "2.52nA")
		set(FieldIdeality, comma("1.75"))
		set(FieldSeriesOhm, "R568")
	}
	w.receipt.Quantity = int64(rapid.IntRange(1, MaxPieces).Draw(t, "quantity"))
	set(FieldQuantity, fmt.Sprint(w.receipt.Quantity)+rapid.SampledFrom([]string{"", " pcs", " Stück"}).Draw(t, "pieces"))
	if maybe("cost") {
		micros := inventory.Micros(rapid.Int64Range(0, maxUnitCost*1_000_000).Draw(t, "micros"))
		w.receipt.UnitCost = &micros
		set(FieldUnitCost, comma(fmt.Sprintf("%d.%06d", micros/1_000_000, micros%1_000_000))+rapid.SampledFrom([]string{"", " €", "€"}).Draw(t, "currency"))
	}
	return w
}

func TestWrittenReceiptsReadBackTheSame(t *testing.T) {
	utf16 := func(endian unicode.Endianness) encoding.Encoding { return unicode.UTF16(endian, unicode.UseBOM) }
	encodings := []struct {
		name     string
		encoding encoding.Encoding
	}{
		{"utf-8", encoding.Nop}, {"utf-8", unicode.UTF8BOM}, {"utf-16le", utf16(unicode.LittleEndian)}, {"utf-16be", utf16(unicode.BigEndian)}, {"windows-1252", charmap.Windows1252},
	}
	rapid.Check(t, func(t *rapid.T) {
		receipts := rapid.SliceOfN(rapid.Custom(drawReceipt), 1, 5).Draw(t, "receipts")
		delimiter := rapid.SampledFrom([]string{",", ";", "\t", "|"}).Draw(t, "delimiter")
		lineEnd := rapid.SampledFrom([]string{"\n", "\r\n", "\r"}).Draw(t, "line end")
		fields := rapid.Permutation(Fields()).Draw(t, "fields")
		w := rejectWriter{delimiter: delimiter, lineEnd: lineEnd}
		w.WriteString(strings.Repeat("Lagerliste"+lineEnd+lineEnd, rapid.IntRange(0, 2).Draw(t, "preamble")))
		var headings []string
		for _, field := range fields {
			heading := rapid.SampledFrom(append(synonyms[field], string(field))).Draw(t, "heading")
			if kindHeadings[heading] != "" {
				heading = string(field) // says the kind as well
			}
			headings = append(headings, rapid.SampledFrom([]string{heading, strings.ToUpper(heading), " " + heading + " "}).Draw(t, "as written"))
		}
		w.line(headings[0], headings[1:], false)
		for _, r := range receipts {
			cells := make([]string, len(fields))
			for i, field := range fields {
				cells[i] = r.cells[field]
			}
			w.line(cells[0], cells[1:], false)
		}
		chosen := rapid.SampledFrom(encodings).Draw(t, "encoding")
		content, err := chosen.encoding.NewEncoder().String(w.String())
		if err != nil {
			t.Fatalf("%v in\n%s", err, w.String())
		}
		table, err := Read("stock.csv", []byte(content), Options{})
		if err != nil {
			t.Fatalf("%v\n%s", err, w.String())
		}
		if len(table.Problems)+len(table.Unrecognised) > 0 {
			t.Fatalf("problems %v, unrecognised %v\n%s", table.Problems, table.Unrecognised, w.String())
		}
		if string(table.Delimiter) != delimiter || table.Encoding != chosen.name && strings.ContainsAny(w.String(), "µ€öü±¼") {
			t.Errorf("detected %s, want %q in %s", table.Detected, delimiter, chosen.name)
		}
		if len(table.Rows) != len(receipts) {
			t.Fatalf("%d rows, want %d; skipped %v\n%s", len(table.Rows), len(receipts), table.Skipped, w.String())
		}
		for i, row := range table.Rows {
			if diff := cmp.Diff(receipts[i].receipt, row.Receipt); diff != "" {
				t.Errorf("line %d (-want +got):\n%s\n%s", row.Line, diff, w.String())
			}
		}
	})
}
