package importers

import (
	"errors"
	"strconv"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

// receiptReader turns records into receipts.
type receiptReader struct {
	file     string
	columns  []Column
	numberOf map[Field]int // index into columns
	noted    []int         // columns that go to the note under their heading, indices
	options  Options

	currency     string // of the first cost that states one
	currencyLine int
}

func newReceiptReader(file string, columns []Column, options Options) *receiptReader {
	r := &receiptReader{file: file, columns: columns, numberOf: map[Field]int{}, options: options}
	for i, c := range columns {
		_, taken := r.numberOf[c.Field]
		switch {
		case c.Field == fieldReason:
		case c.Field == "", taken: // taken: only Note occurs more than once
			r.noted = append(r.noted, i)
		default:
			r.numberOf[c.Field] = i
		}
	}
	return r
}

// reading is one row while it is read.
type reading struct {
	*receiptReader
	record
	notes    []string
	problems []Problem
}

// receipt returns the receipt of the record, or all that is wrong with it.
func (r *receiptReader) receipt(rec record) (inventory.Receipt, []Problem) {
	row := &reading{receiptReader: r, record: rec}
	receipt := row.receipt()
	return receipt, row.problems
}

// cell returns what stands in the field's column, without white space around
// it; "" for a dash or n/a, and where the row is too short.
func (row *reading) cell(field Field) string {
	i, found := row.numberOf[field]
	if !found {
		return ""
	}
	return row.cellAt(i)
}

func (row *reading) cellAt(i int) string {
	if i >= len(row.cells) {
		return ""
	}
	cell := strings.TrimSpace(row.cells[i])
	switch cell {
	case "-", "–", "—", "n/a", "N/A":
		return ""
	}
	// Spreadsheets keep leading zeros this way: ="0805".
	if inner, found := strings.CutPrefix(cell, `="`); found && inner != "" && strings.IndexByte(inner, '"') == len(inner)-1 {
		return strings.TrimSpace(inner[:len(inner)-1])
	}
	return cell
}

// problem notes what is wrong with the field's cell.
func (row *reading) problem(field Field, err error) {
	p := Problem{File: row.file, Line: row.line, Reason: reasonOf(err)}
	if i, found := row.numberOf[field]; found {
		p.Column, p.Number = row.columns[i].Heading, i+1
		if i < len(row.cells) {
			p.Value = row.cells[i]
		}
	}
	row.problems = append(row.problems, p)
}

// reasonOf returns the message without the cell that it is about, which the
// problem holds.
func reasonOf(err error) string {
	var m *marking.Error
	if errors.As(err, &m) {
		return m.Message
	}
	return strings.TrimPrefix(err.Error(), "kind: ")
}

func (row *reading) receipt() inventory.Receipt {
	row.checkWidth()
	var part inventory.Part
	part.Kind = row.kind()
	if part.Kind != "" {
		row.readValue(&part)
	}
	row.readFigures(&part)
	part.Dielectric = row.text(FieldDielectric)
	part.Package = row.text(FieldPackage)
	receipt := inventory.Receipt{Bin: row.text(FieldBin), Quantity: row.quantity(), UnitCost: row.unitCost()}
	if part.Kind.Unit() != "" {
		receipt.Measured = row.measured(part.Kind)
	}
	receipt.Note = row.note()
	if len(row.problems) > 0 {
		return inventory.Receipt{}
	}
	var err error
	if receipt.Part, err = inventory.NewPart(part); err != nil {
		field, reason, found := strings.Cut(err.Error(), ": ")
		if _, mapped := row.numberOf[Field(field)]; found && mapped {
			err = errors.New(reason)
		}
		row.problem(Field(field), err)
		return inventory.Receipt{}
	}
	return receipt
}

// checkWidth notes cells beyond the last heading.
func (row *reading) checkWidth() {
	for i := len(row.columns); i < len(row.cells); i++ {
		if cell := strings.TrimSpace(row.cells[i]); cell != "" {
			row.problems = append(row.problems, Problem{File: row.file, Line: row.line, Number: i + 1, Value: row.cells[i],
				Reason: "the row has more cells than there are headings (" + strconv.Itoa(len(row.columns)) + "): a cell that contains the delimiter, such as a decimal comma, must be in quotes"})
			return
		}
	}
}

// kind returns the kind that the row states, its heading implies, or the unit of
// its value shows; else the one that the person gave. "" after a problem.
func (row *reading) kind() inventory.Kind {
	if cell := row.cell(FieldKind); cell != "" {
		if len(cell) > longestHeading {
			row.problem(FieldKind, errors.New("no kind of component; the kinds are "+kindWords()))
			return ""
		}
		kind, err := inventory.ParseKind(cell)
		if err != nil {
			row.problem(FieldKind, err)
		}
		return kind
	}
	value, hasValue := row.numberOf[FieldValue]
	if hasValue && row.columns[value].kind != "" && row.cell(FieldValue) != "" {
		return row.columns[value].kind
	}
	if kind := kindOfUnit(row.withUnit(FieldValue)); kind != "" {
		return kind
	}
	if row.options.Kind != "" {
		return row.options.Kind
	}
	if _, hasKind := row.numberOf[FieldKind]; hasKind || !hasValue {
		row.problem(FieldKind, errKindMissing)
	} else {
		row.problem(FieldValue, errKindUnseen)
	}
	return ""
}

// What is missing in a row.
var (
	errKindMissing     = errors.New("the kind is missing: write one of " + kindWords())
	errKindUnseen      = errors.New("no column gives the kind, and the value does not show it: write the value with its unit (4k7Ω, 100nF), or add a column kind")
	errValueMissing    = errors.New("the value is missing: write one such as 4k7 or 100n")
	errQuantityMissing = errors.New("the quantity is missing: write the number of pieces")
)

func kindWords() string {
	words := make([]string, 0, len(inventory.Kinds()))
	for _, k := range inventory.Kinds() {
		words = append(words, string(k))
	}
	return strings.Join(words, ", ")
}

// kindOfUnit returns the kind that the unit of a value shows: the ohm sign or
// R, or F after a prefix of capacitance. "" where there is none: 100n may be a
// capacitance or an inductance.
func kindOfUnit(value string) inventory.Kind {
	if value == "" || !strings.ContainsAny(value, "0123456789") {
		return ""
	}
	unit := strings.TrimLeft(value, "0123456789.,' \u00a0\u202f")
	folded := strings.ToLower(unit)
	switch {
	case strings.HasPrefix(folded, "r") && strings.Trim(folded[1:], "0123456789") == "":
		return inventory.Resistor
	case strings.HasSuffix(unit, "Ω"), strings.HasSuffix(unit, "\u2126"), strings.HasSuffix(folded, "ohm"), strings.HasSuffix(folded, "ohms"):
		return inventory.Resistor
	}
	if prefix, found := strings.CutSuffix(folded, "f"); found {
		// The prefix may be the decimal point: 4n7F.
		switch strings.TrimRight(strings.TrimSuffix(prefix, " "), "0123456789") {
		case "p", "n", "u", "µ", "μ", "m":
			return inventory.Capacitor
		}
	}
	return ""
}

// withUnit returns the field's cell, with the unit of its heading after a bare
// number.
func (row *reading) withUnit(field Field) string {
	cell := row.cell(field)
	if cell == "" {
		return ""
	}
	unit := row.columns[row.numberOf[field]].Unit
	if unit == "" || strings.Trim(cell, "0123456789.,' \u00a0\u202f") != "" {
		return cell
	}
	return cell + unit
}

// readValue reads the value, its tolerance and the part number.
func (row *reading) readValue(part *inventory.Part) {
	part.PartNumber = row.text(FieldPartNumber)
	cell := row.withUnit(FieldValue)
	unit := part.Kind.Unit()
	if unit == "" {
		switch {
		case part.PartNumber == "":
			// People write a diode's number where its value would be.
			part.PartNumber = row.text(FieldValue)
		case !strings.EqualFold(part.PartNumber, cell):
			row.keep(FieldValue)
		}
		if part.PartNumber == "" {
			row.problem(FieldPartNumber, errors.New("the part number is missing: "+string(part.Kind)+"s are known by it"))
		}
		row.keep(FieldTolerance)
		row.keep(FieldMeasured)
		return
	}
	part.Value, part.Tolerance = row.value(cell, unit)
	stated := row.withUnit(FieldTolerance)
	if stated == "" {
		return
	}
	value := part.Value
	if value == 0 {
		value = 1e9 // the value is wrong, or a link: see whether the tolerance alone is right
	}
	tolerance, err := marking.ParseTolerance(stated, value, unit)
	switch {
	case err != nil:
		row.problem(FieldTolerance, err)
	case part.Tolerance != nil && *part.Tolerance != tolerance:
		row.problem(FieldTolerance, errors.New("the letter after the value says "+marking.FormatTolerance(*part.Tolerance)+", this cell "+marking.FormatTolerance(tolerance)+": correct one of them"))
	default:
		part.Tolerance = &tolerance
	}
}

// value returns the value in the unit, and the tolerance that its letter states.
func (row *reading) value(cell, unit string) (float64, *marking.Tolerance) {
	if cell == "" {
		row.problem(FieldValue, errValueMissing)
		return 0, nil
	}
	parse := marking.ParseMarkedOhms
	if unit == "f" {
		parse = marking.ParseMarkedFarads
	}
	value, tolerance, err := parse(cell)
	if err != nil {
		row.problem(FieldValue, err)
	}
	return value, tolerance
}

// readFigures reads the ratings and the diode model.
func (row *reading) readFigures(part *inventory.Part) {
	for _, figure := range []struct {
		field Field
		unit  string
		to    *float64
	}{
		{FieldRatingV, "V", &part.RatingV},
		{FieldRatingW, "W", &part.RatingW},
		{FieldForwardV, "V", &part.ForwardV},
		{FieldSaturationA, "A", &part.SaturationA},
		{FieldIdeality, "", &part.Ideality},
		{FieldSeriesOhm, "ohm", &part.SeriesOhm},
	} {
		cell := row.withUnit(figure.field)
		if cell == "" {
			continue
		}
		var err error
		if *figure.to, err = positive(cell, figure.unit); err != nil {
			row.problem(figure.field, err)
		}
	}
	if cell := row.cell(FieldTempco); cell != "" {
		ppm, err := tempcoOf(cell)
		if err != nil {
			row.problem(FieldTempco, err)
		}
		part.TempcoPPM = &ppm
	}
}

// quantity returns the pieces that the row states.
func (row *reading) quantity() int64 {
	cell := row.cell(FieldQuantity)
	if cell == "" {
		row.problem(FieldQuantity, errQuantityMissing)
		return 0
	}
	pieces, err := countOf(cell, row.options.Stocktake)
	if err != nil {
		row.problem(FieldQuantity, err)
	}
	return pieces
}

// unitCost returns the cost of one piece, nil where none is stated. One drawer
// has one currency, so a second one is a problem.
func (row *reading) unitCost() *inventory.Micros {
	cell := row.cell(FieldUnitCost)
	if cell == "" {
		return nil
	}
	cost, currency, err := costOf(cell)
	if err == nil && currency != "" {
		if row.currency == "" {
			row.receiptReader.currency, row.currencyLine = currency, row.line
		} else if currency != row.currency {
			err = errors.New("the cost is in " + currency + ", the one on line " + strconv.Itoa(row.currencyLine) + " in " + row.currency + ": a drawer has one currency, write all in it")
		}
	}
	if err != nil {
		row.problem(FieldUnitCost, err)
	}
	return &cost
}

// measured returns the measured value, 0 where none is stated.
func (row *reading) measured(kind inventory.Kind) float64 {
	cell := row.withUnit(FieldMeasured)
	if cell == "" {
		return 0
	}
	var x float64
	var err error
	if kind.Unit() == "f" {
		x, err = marking.ParseFarads(cell)
	} else {
		x, err = marking.ParseOhms(cell)
	}
	if err == nil && x == 0 {
		err = errors.New("a measured value is above 0: leave the cell empty where nothing was measured")
	}
	if err != nil {
		row.problem(FieldMeasured, err)
	}
	return x
}
