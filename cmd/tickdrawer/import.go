package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"tickdrawer/importers"
	"tickdrawer/inventory"
	"tickdrawer/inventory/sqlite"
)

type importFlags struct {
	columns           []string
	kind, delimiter   string
	encoding          string
	skipBad, again    bool
	stocktake, dryRun bool
}

func (p *program) importCommand() *cobra.Command {
	var flags importFlags
	command := &cobra.Command{
		Use:   "import FILE...",
		Short: "Book parts lists (CSV) into the drawer",
		Long: `Import books every row of the CSV files as a receipt: so many pieces of a part
into a bin. All files are booked together or not at all; a row that cannot be
booked is named with its line, column and reason.

Headings stand in any order and usual spelling: kind, value, tolerance, quantity,
bin, rating_v, rating_w, dielectric, tempco, package, unit_cost, part_number,
measured, note, and for diodes forward_v, saturation_a, ideality, series_ohm.
A column that is not recognised goes into the note; --column names it.`,
		Example: `  tickdrawer import resistors.csv capacitors.csv
  tickdrawer import --column "Wert=value" --column "Stck=quantity" liste.csv
  tickdrawer import --stocktake shelf-a.csv`,
		Args: func(_ *cobra.Command, files []string) error {
			if len(files) == 0 {
				return usagef("FILE is missing: name a CSV file, or - for standard input")
			}
			return nil
		},
		RunE: func(command *cobra.Command, files []string) error {
			return p.runImport(command.Context(), files, flags)
		},
	}
	f := command.Flags()
	f.StringArrayVar(&flags.columns, "column", nil, "take a heading of theirs for a field of ours, `THEIRS=FIELD`; repeat it")
	f.StringVar(&flags.kind, "kind", "", "the `KIND` of rows that do not say it: resistor, capacitor, ...")
	f.StringVar(&flags.delimiter, "delimiter", "", "the `CHARACTER` between cells, or tab; found out where not given")
	f.StringVar(&flags.encoding, "encoding", "", "the text's `ENCODING`; found out where not given")
	f.BoolVar(&flags.skipBad, "skip-bad", false, "book the good rows, write the others to FILE.rejects.csv")
	f.BoolVar(&flags.again, "again", false, "book content that was booked before once more")
	f.BoolVar(&flags.stocktake, "stocktake", false, "rows state what is there: book the difference")
	f.BoolVar(&flags.dryRun, "dry-run", false, "say what would be booked, change nothing")
	return command
}

func (f importFlags) options() (importers.Options, error) {
	options := importers.Options{Columns: map[string]string{}, Encoding: f.encoding, Stocktake: f.stocktake}
	for _, pair := range f.columns {
		at := strings.LastIndex(pair, "=")
		if at < 1 || at == len(pair)-1 {
			return options, usagef("--column %q is not THEIRS=FIELD, such as \"Wert=value\"", pair)
		}
		options.Columns[pair[:at]] = pair[at+1:]
	}
	if f.kind != "" {
		kind, err := inventory.ParseKind(f.kind)
		if err != nil {
			return options, usageError{fmt.Errorf("--kind: %w", err)}
		}
		options.Kind = kind
	}
	switch characters := []rune(f.delimiter); {
	case f.delimiter == "tab" || f.delimiter == `\t`:
		options.Delimiter = '\t'
	case len(characters) == 1:
		options.Delimiter = characters[0]
	case len(characters) > 1:
		return options, usagef("--delimiter %q is not one character, nor tab", f.delimiter)
	}
	return options, nil
}

type rejectedDocument struct {
	Line   int    `json:"line"`
	Column string `json:"column"`
	Value  string `json:"value"`
	Reason string `json:"reason"`
}

type importedFileDocument struct {
	File     string             `json:"file"`
	Rows     int                `json:"rows"`
	Booked   int                `json:"booked"`
	Rejected []rejectedDocument `json:"rejected"`
	Detected string             `json:"detected"`
	Rejects  string             `json:"rejects,omitempty"`
}

type importDocument struct {
	Files          []importedFileDocument `json:"files"`
	LotsCreated    int                    `json:"lots_created"`
	QuantityBooked int64                  `json:"quantity_booked"`
	DryRun         bool                   `json:"dry_run"`
}

func (p *program) runImport(ctx context.Context, files []string, flags importFlags) error {
	options, err := flags.options()
	if err != nil {
		return err
	}
	var tables []importers.Table
	bad := 0
	for _, file := range files {
		table, err := p.readTable(file, options)
		if err != nil {
			return err
		}
		bad += len(table.Rejected)
		tables = append(tables, table)
	}
	document := importDocument{DryRun: flags.dryRun}
	for _, table := range tables {
		p.noteTable(table)
		entry := importedFileDocument{File: table.File, Rows: table.RowCount(), Booked: len(table.Rows), Rejected: []rejectedDocument{}, Detected: table.Detected}
		for _, problem := range table.Problems {
			entry.Rejected = append(entry.Rejected, rejectedDocument{problem.Line, problem.Column, problem.Value, problem.Reason})
		}
		document.Files = append(document.Files, entry)
	}
	if bad > 0 && !flags.skipBad {
		for i := range document.Files {
			document.Files[i].Booked = 0
		}
		if p.json {
			if err := p.printJSON(document); err != nil {
				return err
			}
		}
		return fmt.Errorf("nothing was booked: %s cannot be; mend them, or book the others with --skip-bad", counted(bad, "row"))
	}
	if flags.skipBad && !flags.dryRun {
		if err := p.writeRejects(tables, document.Files); err != nil {
			return err
		}
	}
	booking, err := p.book(ctx, tables, flags)
	if err != nil {
		for _, entry := range document.Files {
			if entry.Rejects != "" {
				os.Remove(entry.Rejects) // nothing was left out, since nothing was booked
			}
		}
		return err
	}
	document.LotsCreated, document.QuantityBooked = booking.LotsCreated, booking.QuantityBooked
	if p.json {
		return p.printJSON(document)
	}
	p.printImport(document, booking, flags)
	return nil
}

// readTable reads a file, or standard input for "-".
func (p *program) readTable(file string, options importers.Options) (importers.Table, error) {
	source := p.in
	if file != "-" {
		opened, err := os.Open(file)
		if err != nil {
			return importers.Table{}, fmt.Errorf("%s: %w", file, systemReason(err))
		}
		defer opened.Close()
		if info, err := opened.Stat(); err == nil && info.IsDir() {
			return importers.Table{}, fmt.Errorf("%s is a folder: name a CSV file", file)
		}
		source = opened
	}
	return importers.ReadFrom(file, source, options)
}

// systemReason returns what the system says without the call and the path.
func systemReason(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}

// noteTable says what was found in a file and what is wrong with it.
func (p *program) noteTable(table importers.Table) {
	p.notef("%s: %s", table.File, table.Detected)
	for _, unknown := range table.Unrecognised {
		hint := ""
		if unknown.Nearest != "" {
			hint = fmt.Sprintf(" (the nearest field is %s)", unknown.Nearest)
		}
		p.notef("%s: the column %q is not recognised%s; it is kept in the note", table.File, unknown.Heading, hint)
	}
	for _, skip := range table.Skipped {
		p.notef("%s, line %d: skipped: %s", table.File, skip.Line, skip.Reason)
	}
	for _, problem := range table.Problems {
		p.notef("%s", problem)
	}
}

// writeRejects writes the rows that are left out beside their files, before
// anything is booked, so that no row is lost.
func (p *program) writeRejects(tables []importers.Table, entries []importedFileDocument) error {
	for i, table := range tables {
		content := importers.Rejects(table)
		if content == nil {
			continue
		}
		name := table.File + ".rejects.csv"
		if table.File == "-" {
			name = "stdin.rejects.csv"
		}
		file, err := os.OpenFile(name, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o644)
		if errors.Is(err, fs.ErrExist) {
			return fmt.Errorf("%s exists already and is not replaced; nothing was booked; move it away first", name)
		}
		if err != nil {
			return fmt.Errorf("%s: %w; nothing was booked", name, systemReason(err))
		}
		_, err = io.Copy(file, bytes.NewReader(content))
		if err = errors.Join(err, file.Close()); err != nil {
			return fmt.Errorf("%s: %w; nothing was booked", name, systemReason(err))
		}
		entries[i].Rejects = name
	}
	return nil
}

func (p *program) book(ctx context.Context, tables []importers.Table, flags importFlags) (sqlite.Booking, error) {
	path := p.drawerPath()
	if _, err := os.Stat(path); flags.dryRun && errors.Is(err, fs.ErrNotExist) {
		scratch, err := os.MkdirTemp("", "tickdrawer-dry-run-")
		if err != nil {
			return sqlite.Booking{}, err
		}
		defer os.RemoveAll(scratch)
		path = filepath.Join(scratch, "stock.drawer")
	}
	drawer, err := sqlite.Open(ctx, path, sqlite.Options{Create: true, Now: p.now, Who: p.who})
	if err != nil {
		return sqlite.Booking{}, err
	}
	defer drawer.Close()
	intake := sqlite.Intake{Stocktake: flags.stocktake, Again: flags.again, DryRun: flags.dryRun}
	for _, table := range tables {
		file := sqlite.IntakeFile{Name: table.File, SHA256: table.SHA256}
		for _, row := range table.Rows {
			file.Receipts = append(file.Receipts, row.Receipt)
		}
		intake.Files = append(intake.Files, file)
	}
	return drawer.Book(ctx, intake)
}

func (p *program) printImport(document importDocument, booking sqlite.Booking, flags importFlags) {
	columns := []column{{title: "FILE", wraps: true}, {title: "ROWS", right: true}, {title: "BOOKED", right: true}, {title: "LEFT OUT", right: true}}
	var rows [][]string
	for _, file := range document.Files {
		rows = append(rows, []string{file.File, fmt.Sprint(file.Rows), fmt.Sprint(file.Booked), fmt.Sprint(file.Rows - file.Booked)})
	}
	p.printTable(columns, rows)
	what := "booked"
	if flags.dryRun {
		what = "dry run, nothing was changed; would book"
	}
	p.printf("")
	p.printf("%s %s into %s", what, counted(booking.QuantityBooked, "piece"), p.drawerPath())
	p.printf("new lots: %d", booking.LotsCreated)
	if booking.Movements > 0 && !flags.dryRun {
		p.printf("movements: %d to %d", booking.First, booking.Last)
	}
	for _, file := range document.Files {
		if file.Rejects != "" {
			p.printf("left out: see %s", file.Rejects)
		}
	}
}

// counted returns the number with its noun, in the plural where it is not one.
func counted[N int | int64](n N, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
