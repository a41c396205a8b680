package importers

import (
	"maps"
	"slices"
	"strings"
	"unicode"

	"golang.org/x/text/unicode/norm"

	"tickdrawer/inventory"
)

// longestHeading is the most bytes of a cell that can be a heading.
const longestHeading = 80

// rejectHeading is the heading of the column that Rejects adds.
const rejectHeading = "reason"

// The synonyms by their folded form.
var (
	fieldOf = folded(synonyms)
	kindOf  = func() map[string]inventory.Kind {
		kinds := map[string]inventory.Kind{}
		for heading, kind := range kindHeadings {
			kinds[fold(heading)] = kind
		}
		return kinds
	}()
)

func folded(synonyms map[Field][]string) map[string]Field {
	fields := map[string]Field{}
	for field, headings := range synonyms {
		fields[fold(string(field))] = field
		for _, heading := range headings {
			fields[fold(heading)] = field
		}
	}
	return fields
}

var foldedSigns = strings.NewReplacer("#", "no", "ß", "ss")

// fold returns the letters and digits of a text in lower case and without
// accents, so that "Part-No.", "PartNo" and "PART NO" are one. # is read as no.
func fold(text string) string {
	text = foldedSigns.Replace(strings.ToLower(text))
	return strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			return r
		}
		return -1
	}, norm.NFKD.String(text))
}

// headingReader tells what a heading means.
type headingReader struct {
	stated map[string]Field // folded heading → field, from Options.Columns
}

// newHeadingReader returns a reader with the person's own headings. The error
// names a field that does not exist, or a heading given twice.
func newHeadingReader(columns map[string]string) (headingReader, error) {
	h := headingReader{stated: map[string]Field{}}
	for _, theirs := range slices.Sorted(maps.Keys(columns)) {
		field := Field(strings.ToLower(strings.TrimSpace(columns[theirs])))
		if !slices.Contains(Fields(), field) {
			return h, refused("--column %s: there is no field %s; the fields are %s", quoted(theirs+"="+columns[theirs]), quoted(columns[theirs]), fieldWords())
		}
		folded := fold(theirs)
		if other, found := h.stated[folded]; found && other != field {
			return h, refused("--column gives the heading %s two fields, %s and %s", quoted(theirs), other, field)
		}
		h.stated[folded] = field
	}
	return h, nil
}

func fieldWords() string {
	words := make([]string, 0, len(Fields()))
	for _, f := range Fields() {
		words = append(words, string(f))
	}
	return strings.Join(words, ", ")
}

// recognised returns how many fields the cells name.
func (h headingReader) recognised(cells []string) int {
	var fields []Field
	for _, cell := range cells {
		if c := h.column(cell); c.Field != "" && !slices.Contains(fields, c.Field) {
			fields = append(fields, c.Field)
		}
	}
	return len(fields)
}

// column returns what the heading means: the person's word for it, a synonym, a
// synonym with a unit ("Value (nF)", "Power/W"), or a unit alone ("µF").
func (h headingReader) column(heading string) Column {
	c := Column{Heading: strings.TrimSpace(heading)}
	if c.Heading == "" || len(c.Heading) > longestHeading {
		return c
	}
	folded := fold(c.Heading)
	field, stated := h.stated[folded]
	if !stated {
		var known bool
		if field, known = fieldOf[folded]; !known {
			return unitColumn(c)
		}
	}
	c.Field, c.kind = field, kindOf[folded]
	if stated {
		for _, s := range suffixes(c.Heading) {
			if unit, sound := statedUnit(field, s); sound {
				c.Unit = unit
				break
			}
		}
	}
	return c
}

// unitColumn returns what a heading with a unit means.
func unitColumn(c Column) Column {
	for _, s := range suffixes(c.Heading) {
		base := fold(s.base)
		field, found := fieldOf[base]
		if !found {
			continue
		}
		if unit, sound := statedUnit(field, s); sound {
			c.Field, c.Unit, c.kind = field, unit, kindOf[base]
			return c
		}
	}
	if unit, sound := statedUnit(FieldValue, suffix{text: c.Heading}); sound {
		c.Field, c.Unit = FieldValue, unit
	}
	return c
}

// suffix is a heading divided before what may be its unit.
type suffix struct {
	base, text string
	bracketed  bool
}

// mostSuffixes is how many ways to divide a heading are tried.
const mostSuffixes = 3

// suffixes returns the heading divided before each of its last brackets,
// slashes, commas or spaces: "Value [nF]" into Value and nF, "TCR ppm/K" into
// TCR ppm and K, then into TCR and ppm/K, "Wert in kΩ" into Wert and kΩ.
func suffixes(heading string) []suffix {
	var found []suffix
	end := len(heading)
	for len(found) < mostSuffixes {
		at := strings.LastIndexAny(heading[:end], "([{/,; \t")
		if at <= 0 {
			break
		}
		end = at
		s := suffix{
			base:      strings.TrimSpace(heading[:at]),
			text:      strings.Trim(heading[at:], "()[]{}/,; \t."),
			bracketed: strings.IndexByte("([{", heading[at]) >= 0,
		}
		for _, in := range []string{" in", " en"} {
			s.base = strings.TrimSuffix(s.base, in)
		}
		found = append(found, s)
	}
	return found
}

// statedUnit returns what the bare numbers of a column take when its heading
// carries the suffix, "" for nothing. A suffix that could change a number's
// meaning and is not understood ("Quantity (reels)", "Price (per 100)") makes
// the heading unsound.
func statedUnit(field Field, s suffix) (unit string, sound bool) {
	suffix := s.text
	units := func(symbols string, words ...string) (string, bool) {
		for _, word := range words {
			if strings.EqualFold(suffix, word) {
				return symbols, true
			}
		}
		prefix, found := strings.CutSuffix(suffix, symbols)
		return suffix, found && (prefix == "" || slices.Contains([]string{"p", "n", "u", "µ", "μ", "m", "k", "M"}, prefix))
	}
	switch field {
	case FieldKind, FieldBin, FieldDielectric, FieldPackage, FieldPartNumber, FieldNote:
		return "", s.bracketed
	case FieldQuantity:
		return "", slices.ContainsFunc(pieceWords, func(word string) bool { return fold(word) == fold(suffix) })
	case FieldUnitCost:
		_, rest := cutCurrency(suffix)
		return "", rest == ""
	case FieldTolerance:
		return "%", suffix == "%"
	case FieldTempco:
		return "", strings.HasPrefix(strings.ToLower(suffix), "ppm")
	case FieldRatingV, FieldForwardV:
		return units("V", "volt", "volts", "vdc")
	case FieldRatingW:
		return units("W", "watt", "watts")
	case FieldSaturationA:
		return units("A", "ampere", "amp")
	case FieldValue, FieldMeasured, FieldSeriesOhm:
		for _, ohm := range []string{"ohms", "ohm", "Ohms", "Ohm", "OHM", "\u2126"} {
			if prefix, found := strings.CutSuffix(suffix, ohm); found {
				suffix = strings.TrimSpace(prefix) + "Ω"
				break
			}
		}
		if unit, sound := units("Ω"); sound {
			return unit, true
		}
		if field != FieldSeriesOhm && len(suffix) > 1 && suffix != "kF" && suffix != "MF" {
			return units("F")
		}
	}
	return "", false
}

// columnsOf returns the columns of a heading line. The errors are headings that
// mean one field, a stated heading that is not there, and a required field that
// no column gives.
func (h headingReader) columnsOf(heading record, options Options) ([]Column, []Unrecognised, error) {
	columns := make([]Column, len(heading.cells))
	stated := map[Field]bool{}
	missing := maps.Clone(h.stated)
	for i, cell := range heading.cells {
		columns[i] = h.column(cell)
		columns[i].Number = i + 1
		if _, found := h.stated[fold(cell)]; found && columns[i].Heading != "" {
			stated[columns[i].Field] = true
			delete(missing, fold(cell))
		}
	}
	if len(heading.cells) > 0 && columns[0].Heading == rejectHeading && columns[0].Field == "" {
		columns[0].Field = fieldReason
	}
	for _, theirs := range slices.Sorted(maps.Keys(options.Columns)) {
		if _, found := missing[fold(theirs)]; found {
			return nil, nil, refused("--column %s: line %d has no such heading; it has %s", quoted(theirs+"="+options.Columns[theirs]), heading.line, headingWords(columns))
		}
	}
	first := map[Field]Column{}
	for i, c := range columns {
		// What the person says a field is goes before what is recognised.
		if _, found := h.stated[fold(c.Heading)]; !found && stated[c.Field] && c.Field != FieldNote {
			columns[i].Field, columns[i].Unit, columns[i].kind = "", "", ""
			continue
		}
		if c.Field == "" || c.Field == FieldNote {
			continue
		}
		if other, found := first[c.Field]; found {
			return nil, nil, refused("line %d: the headings %s (column %d) and %s (column %d) both mean %s: map one of them with --column, to %s if it is only to be kept",
				heading.line, quoted(other.Heading), other.Number, quoted(c.Heading), c.Number, c.Field, FieldNote)
		}
		first[c.Field] = c
	}
	if err := requireFields(first, heading.line, columns, options.Kind); err != nil {
		return nil, nil, err
	}
	var unrecognised []Unrecognised
	for _, c := range columns {
		if c.Field == "" && c.Heading != "" {
			unrecognised = append(unrecognised, Unrecognised{Heading: c.Heading, Number: c.Number, Nearest: nearestField(c.Heading)})
		}
	}
	return columns, unrecognised, nil
}

// requireFields returns an error where the columns cannot make a receipt.
func requireFields(first map[Field]Column, line int, columns []Column, kind inventory.Kind) error {
	_, hasKind := first[FieldKind]
	_, hasValue := first[FieldValue]
	_, hasNumber := first[FieldPartNumber]
	_, hasQuantity := first[FieldQuantity]
	var missing string
	switch {
	case !hasQuantity:
		missing = "quantity"
	case !hasValue && !hasNumber:
		missing = "value or part_number"
	case !hasKind && kind == "" && !hasValue:
		missing = "kind"
	default:
		return nil
	}
	return refused("no column gives %s: the headings on line %d are %s; map one with --column \"THEIRS=%s\"",
		missing, line, headingWords(columns), strings.TrimPrefix(missing, "value or "))
}

// headingWords returns the headings as a list for messages.
func headingWords(columns []Column) string {
	const most = 20
	var words []string
	for _, c := range columns {
		if c.Heading == "" {
			continue
		}
		if len(words) == most {
			words = append(words, "…")
			break
		}
		words = append(words, quoted(c.Heading))
	}
	return strings.Join(words, ", ")
}

// nearestField returns the field whose headings the heading's spelling comes
// nearest to: one that it contains, or one at most a third of its letters away.
// "" where none is near.
func nearestField(heading string) Field {
	written := []rune(fold(heading))
	if len(written) == 0 || len(heading) > longestHeading {
		return ""
	}
	var nearest Field
	fewest := len(written)/3 + 1
	longest := 3 // contained words shorter than this say nothing
	for _, known := range slices.Sorted(maps.Keys(fieldOf)) {
		if n := edits(written, []rune(known)); n < fewest {
			nearest, fewest = fieldOf[known], n
		}
	}
	if nearest != "" {
		return nearest
	}
	for _, known := range slices.Sorted(maps.Keys(fieldOf)) {
		if len(known) > longest && strings.Contains(string(written), known) {
			nearest, longest = fieldOf[known], len(known)
		}
	}
	return nearest
}

// edits returns the Levenshtein distance of two texts.
func edits(a, b []rune) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range a {
		diagonal := row[0]
		row[0] = i + 1
		for j := range b {
			substituted := diagonal
			if a[i] != b[j] {
				substituted++
			}
			diagonal = row[j+1]
			row[j+1] = min(substituted, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
