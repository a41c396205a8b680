package main

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"tickdrawer/importers"
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
  tickdrawer import --column "Fach=bin" --column "Bemerkung=note" capacitors.csv
  tickdrawer import --stocktake odds.csv`,
		Args: func(_ *cobra.Command, files []string) error {
			if len(files) == 0 {
				return usagef("FILE is missing: name a CSV file, or - for standard input")
			}
			return nil
		},
		RunE: func(command *cobra.Command, files []string) error {
			options, err := flags.options(command.Flags().Changed)
			if err != nil {
				return err
			}
			return p.runImport(command.Context(), files, options, flags)
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

func (p *program) runImport(ctx context.Context, files []string, options importers.Options, flags importFlags) error {
	tables, err := p.readTables(files, options)
	for _, table := range tables {
		p.noteTable(table)
	}
	if err != nil {
		return err
	}
	document := documentOfImport(files, tables, flags.dryRun)
	bad := 0
	for _, table := range tables {
		bad += len(table.Rejected)
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
	var written []string
	if flags.skipBad && !flags.dryRun {
		if written, err = writeRejects(tables, document.Files); err != nil {
			return err
		}
	}
	booking, err := p.book(ctx, tables, flags)
	if err != nil {
		removeAll(written) // nothing was left out, since nothing was booked
		return err
	}
	document.LotsCreated, document.QuantityBooked = booking.LotsCreated, booking.QuantityBooked
	if p.json {
		return p.printJSON(document)
	}
	p.printImport(document, booking, flags)
	return nil
}

// readTables reads the files. The error names every file that is no parts list;
// the tables of the others come with it.
func (p *program) readTables(files []string, options importers.Options) ([]importers.Table, error) {
	var tables []importers.Table
	var wrong []error
	for _, file := range files {
		table, err := p.readTable(file, options)
		if err != nil {
			wrong = append(wrong, err)
			continue
		}
		tables = append(tables, table)
	}
	return tables, errors.Join(wrong...)
}

// readTable reads a file, or standard input for "-".
func (p *program) readTable(file string, options importers.Options) (importers.Table, error) {
	if file == "-" {
		return importers.ReadFrom("standard input", p.in, options)
	}
	opened, err := os.Open(file)
	if err != nil {
		return importers.Table{}, fmt.Errorf("%s: %w", file, systemReason(err))
	}
	defer opened.Close()
	if about, err := opened.Stat(); err == nil && about.IsDir() {
		return importers.Table{}, fmt.Errorf("%s is a folder: name a CSV file", file)
	}
	return importers.ReadFrom(file, opened, options)
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
// anything is booked, so that no row is lost. It returns the files written; on an
// error there are none.
func writeRejects(tables []importers.Table, entries []importedFileDocument) (written []string, err error) {
	for i, table := range tables {
		content := importers.Rejects(table)
		if content == nil {
			continue
		}
		name := entries[i].File + ".rejects.csv"
		if entries[i].File == "-" {
			name = "stdin.rejects.csv"
		}
		if _, err = os.Lstat(name); err == nil {
			err = fmt.Errorf("%s exists already and is not replaced: move it away first", name)
		} else {
			err = writeNew(name, content)
		}
		if err != nil {
			removeAll(written)
			return nil, fmt.Errorf("nothing was booked: %w", err)
		}
		entries[i].Rejects = name
		written = append(written, name)
	}
	return written, nil
}

// book books the tables. A drawer that is not there yet is made by its first
// booking: a trial run in a scratch drawer comes before it, so that what cannot
// be booked leaves no empty drawer.
func (p *program) book(ctx context.Context, tables []importers.Table, flags importFlags) (sqlite.Booking, error) {
	intake := sqlite.Intake{Stocktake: flags.stocktake, Again: flags.again, DryRun: flags.dryRun}
	for _, table := range tables {
		file := sqlite.IntakeFile{Name: table.File, SHA256: table.SHA256}
		for _, row := range table.Rows {
			file.Receipts = append(file.Receipts, row.Receipt)
		}
		intake.Files = append(intake.Files, file)
	}
	path := p.drawerPath()
	if _, err := os.Stat(path); errors.Is(err, fs.ErrNotExist) {
		scratch, err := os.MkdirTemp("", "tickdrawer-trial-")
		if err != nil {
			return sqlite.Booking{}, fmt.Errorf("a trial run needs room for a file: %w", err)
		}
		defer os.RemoveAll(scratch)
		booking, err := p.bookInto(ctx, filepath.Join(scratch, "stock.drawer"), intake)
		if err != nil || flags.dryRun {
			return booking, err
		}
	}
	return p.bookInto(ctx, path, intake)
}

func (p *program) bookInto(ctx context.Context, path string, intake sqlite.Intake) (sqlite.Booking, error) {
	drawer, err := sqlite.Open(ctx, path, sqlite.Options{Create: true, Now: p.now, Who: p.who})
	if err != nil {
		return sqlite.Booking{}, err
	}
	defer drawer.Close()
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
	pieces := counted(booking.QuantityBooked, "piece")
	if flags.stocktake {
		pieces = fmt.Sprintf("a difference of %+d pieces", booking.QuantityBooked)
	}
	p.printf("")
	p.printf("%s %s into %s", what, pieces, p.drawerPath())
	p.printf("new lots: %d", booking.LotsCreated)
	if booking.Movements > 0 && !flags.dryRun {
		p.printf("%s", movementNumbers(booking.First, booking.Last))
	}
	for _, file := range document.Files {
		if file.Rejects != "" {
			p.printf("left out: see %s", file.Rejects)
		}
	}
}
