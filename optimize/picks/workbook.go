package picks

import (
	"fmt"
	"strings"
	"time"

	"github.com/xuri/excelize/v2"

	"tickdrawer/optimize"
)

// The sheets, besides one a variant.
const (
	sheetPicks     = "Picks"
	sheetBoard     = "Board" // the only variant
	sheetTiming    = "Timing"
	sheetShortages = "Shortages"
	sheetCautions  = "Cautions"
)

// Workbook returns the plan as an Office Open XML workbook (ECMA-376): the
// picks; a sheet per variant; the timing in s, Hz and %; what is short, where
// anything is; cautions. Counts and figures are numbers with a number format.
// Every text of the plan is a text cell, whatever it begins with.
//
// The error says which part of the workbook could not be written.
func Workbook(plan optimize.Plan, opts Options) ([]byte, error) {
	b := &book{file: excelize.NewFile(), styles: map[look]int{}, opts: opts, job: plan.Job.Name}
	defer b.file.Close()
	b.properties()
	for _, section := range []struct {
		name  string
		write func(optimize.Plan)
	}{
		{"picks", b.picks},
		{"variants", b.variants},
		{"timing", b.timing},
		{"shortages", b.shortages},
		{"cautions", b.cautions},
	} {
		if section.write(plan); b.err != nil {
			return nil, fmt.Errorf("workbook, %s: %w", section.name, b.err)
		}
	}
	b.check(b.file.DeleteSheet("Sheet1")) // which a new file holds
	b.file.SetActiveSheet(0)
	out, err := b.file.WriteToBuffer()
	if b.check(err); b.err != nil {
		return nil, fmt.Errorf("workbook: %w", b.err)
	}
	return out.Bytes(), nil
}

// properties sets what the file says of itself, and the font that column widths
// are counted in.
func (b *book) properties() {
	b.check(b.file.SetDefaultFont(font))
	if b.err == nil {
		*b.file.Styles.Fonts.Font[0].Sz.Val = bodySize
	}
	props := &excelize.DocProperties{
		Title: shortened("Picks for " + b.job), Subject: shortened(b.job), Creator: "tickdrawer", LastModifiedBy: "tickdrawer", Language: "en",
	}
	if !b.opts.Now.IsZero() {
		props.Created = b.opts.Now.UTC().Format(time.RFC3339)
		props.Modified = props.Created
	}
	b.check(b.file.SetDocProps(props))
	b.check(b.file.SetAppProps(&excelize.AppProperties{Application: "tickdrawer"}))
}

func variantSheet(plan optimize.Plan, i int) string {
	if len(plan.Variants) == 1 {
		return sheetBoard
	}
	return fmt.Sprintf("Variant %d", i+1)
}

// counted returns the number with its word.
func counted(n int64, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

// joined returns the texts that are not empty with the separator between them.
func joined(separator string, texts ...string) string {
	var kept []string
	for _, text := range texts {
		if text != "" {
			kept = append(kept, text)
		}
	}
	return strings.Join(kept, separator)
}
