package sqlite

import (
	"context"
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

func micros(n inventory.Micros) *inventory.Micros { return &n }

func TestBookBeginsALotAndTopsItUp(t *testing.T) {
	d := fresh(t)
	got := book(t, d, Intake{Files: []IntakeFile{
		file("a.csv",
			inventory.Receipt{Part: ohms(t, 4700), Bin: "A1", Quantity: 10, Note: "reduced lead"},
			inventory.Receipt{Part: ohms(t, 4700), Bin: "A2", Quantity: 20},
			inventory.Receipt{Part: ohms(t, 4700), Bin: "A1", Quantity: 5, Measured: 4712}),
		file("b.csv", inventory.Receipt{Part: ohms(t, 4700), Bin: "A1", Quantity: 7, UnitCost: micros(12_500), Note: "lead"}),
	}})
	if want := (Booking{LotsCreated: 3, QuantityBooked: 42, Movements: 4, First: 1, Last: 4}); got != want {
		t.Errorf("booked %+v, want %+v", got, want)
	}
	book(t, d, Intake{Files: []IntakeFile{file("c.csv",
		inventory.Receipt{Part: ohms(t, 4700), Bin: "A1", Quantity: 1, UnitCost: micros(9_000), Note: "reduced lead"},
		inventory.Receipt{Part: ohms(t, 4700), Bin: "A1", Quantity: 1, Note: "lead"})}})
	lots, err := d.Lots(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	if len(lots) != 3 {
		t.Fatalf("%d lots, want 3: %+v", len(lots), lots)
	}
	a1 := lots[0]
	if a1.OnHand != 19 || a1.Bin != "A1" || a1.Measured != 0 || a1.UnitCost == nil || *a1.UnitCost != 9_000 || a1.Note != "reduced lead; lead" {
		t.Errorf("lot 1 is %+v", a1)
	}
	if lots[1].OnHand != 20 || lots[1].UnitCost != nil || lots[2].OnHand != 5 || lots[2].Measured != 4712 {
		t.Errorf("lots 2 and 3 are %+v", lots[1:])
	}
	wantSound(t, d)
}

func TestDrawerReturnsThePartAsItWasBooked(t *testing.T) {
	zero := 0.0
	var receipts []inventory.Receipt
	parts := []inventory.Part{
		{Kind: inventory.Resistor, Value: 0},
		{Kind: inventory.Resistor, Value: 4.7e3, Tolerance: &marking.Tolerance{Minus: 0, Plus: 0}, RatingW: 0.25, TempcoPPM: &zero, Package: "axial"},
		{Kind: inventory.Capacitor, Value: 4.7e-12, Tolerance: &marking.Tolerance{Minus: 0.2, Plus: 0.8}, RatingV: 50, Dielectric: "X7R"},
		{Kind: inventory.Potentiometer, Value: math.SmallestNonzeroFloat64},
		{Kind: inventory.Resistor, Value: math.MaxFloat64, RatingV: math.MaxFloat64, RatingW: math.MaxFloat64, Tolerance: &marking.Tolerance{Minus: 0.999, Plus: math.MaxFloat64}},
		{Kind: inventory.Diode, PartNumber: "1N4148", ForwardV: 0.7, SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: 0.568},
		{Kind: inventory.Timer, PartNumber: "NE555"},
		{Kind: inventory.Inverter, PartNumber: "74HC14"},
		{Kind: inventory.Other, PartNumber: `ÄÖ"'; DROP TABLE LOT --`},
	}
	for i, p := range parts {
		part, err := inventory.NewPart(p)
		if err != nil {
			t.Fatal(err)
		}
		parts[i] = part
		receipts = append(receipts, inventory.Receipt{Part: part, Quantity: 1})
	}
	d := fresh(t)
	book(t, d, Intake{Files: []IntakeFile{file("parts.csv", receipts...)}})
	lots, err := d.Lots(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	for i, lot := range lots {
		if lot.Part.Key() != parts[i].Key() {
			t.Errorf("booked %s, returned %s", parts[i].Key(), lot.Part.Key())
		}
	}
	if len(lots) != len(parts) {
		t.Errorf("%d lots, want %d", len(lots), len(parts))
	}
	wantSound(t, d)
}

// A lot that is topped up for years keeps the latest notes, of bounded length.
func TestNotesGiveWayOldestFirst(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		word := rapid.StringMatching(`[a-zé]{1,9}(; [a-z]{1,9})?`)
		note := ""
		for range rapid.IntRange(1, 40).Draw(t, "bookings") {
			other := strings.Repeat(word.Draw(t, "note"), rapid.SampledFrom([]int{1, 1, 30, 90, 120}).Draw(t, "times"))
			before := note
			note = withNote(note, other)
			if note == before {
				if !strings.Contains("; "+note+"; ", "; "+other+"; ") {
					t.Fatalf("%q was not added", other)
				}
				continue
			}
			if len(note) > mostNote || !utf8.ValidString(note) {
				t.Fatalf("the note has %d bytes: %q", len(note), note)
			}
			if !strings.HasSuffix("; "+note, "; "+other) {
				t.Fatalf("%q does not end the note", other)
			}
			rest, cut := strings.CutPrefix(note, "…; ")
			if !cut && before != "" && !strings.HasPrefix(note, before) {
				t.Fatalf("%q has become %q, and nothing says that anything is left out", before, note)
			}
			if rest = strings.TrimSuffix(strings.TrimSuffix(rest, other), "; "); !strings.HasSuffix(before, rest) && rest != before {
				t.Fatalf("%q has become %q: not the oldest gave way", before, note)
			}
		}
	})
}

func TestSameContentIsBookedOnce(t *testing.T) {
	d := stocked(t, 10)
	same := file("stock.csv", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: 10})
	same.Name = "copy of stock.csv"
	before := contents(t, d)
	_, err := d.Book(context.Background(), Intake{Files: []IntakeFile{file("new.csv", inventory.Receipt{Part: ohms(t, 1), Quantity: 1}), same}})
	wantReason(t, err, inventory.Conflict, "copy of stock.csv was booked already", "as stock.csv", "2026-03-14 at 12:00", "--again")
	if after := contents(t, d); after != before {
		t.Errorf("refused, and yet changed:\n%s", after)
	}
	_, err = d.Book(context.Background(), Intake{Files: []IntakeFile{file("x.csv"), {Name: "y.csv", SHA256: file("x.csv").SHA256}}})
	wantReason(t, err, inventory.Conflict, "x.csv and y.csv hold the same content", "--again")
	book(t, d, Intake{Again: true, Files: []IntakeFile{same}})
	if onHand, _ := lotOf(t, d, 1); onHand != 20 {
		t.Errorf("with again: %d on hand, want 20", onHand)
	}
}

func TestStocktakeBooksTheDifference(t *testing.T) {
	d := stocked(t, 10, 20, 30)
	counted := func(ohm float64, bin string, pieces int64) inventory.Receipt {
		return inventory.Receipt{Part: ohms(t, ohm), Bin: bin, Quantity: pieces}
	}
	got := book(t, d, Intake{Stocktake: true, Files: []IntakeFile{
		file("shelf.csv", counted(1000, "A1", 4), counted(2000, "A2", 0), counted(4000, "B1", 0), counted(5000, "B2", 3)),
		file("shelf-2.csv", counted(1000, "A1", 3)),
	}})
	// 10 → 4 + 3, 20 → 0, new 3; lot 3 is not named; none of 4 kΩ is no lot.
	if want := (Booking{LotsCreated: 1, QuantityBooked: -3 - 20 + 3, Movements: 3, First: 4, Last: 6}); got != want {
		t.Errorf("booked %+v, want %+v", got, want)
	}
	for id, want := range map[inventory.LotID]int64{1: 7, 2: 0, 3: 30, 4: 3} {
		if onHand, _ := lotOf(t, d, id); onHand != want {
			t.Errorf("lot %d: %d on hand, want %d", id, onHand, want)
		}
	}
	again := book(t, d, Intake{Stocktake: true, Files: []IntakeFile{file("once more", counted(1000, "A1", 7))}})
	if again != (Booking{}) {
		t.Errorf("a count that agrees booked %+v", again)
	}
	wantSound(t, d)
}

func TestStocktakeBelowWhatIsReservedNamesTheKits(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 20)
	for range 2 {
		if err := d.Reserve(ctx, planned(t, d, inventory.Pick{Lot: 1, Quantity: 4})); err != nil {
			t.Fatal(err)
		}
	}
	before := contents(t, d)
	_, err := d.Book(ctx, Intake{Stocktake: true, Files: []IntakeFile{file("shelf.csv",
		inventory.Receipt{Part: ohms(t, 2000), Bin: "A2", Quantity: 1},
		inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: 7})}})
	wantReason(t, err, inventory.Shortage, "lot 1", "7 counted", "8 reserved by kit 1 and kit 2", "nothing was booked", "tickdrawer release")
	if after := contents(t, d); after != before {
		t.Errorf("refused, and yet changed:\n%s", after)
	}
	book(t, d, Intake{Stocktake: true, Files: []IntakeFile{file("shelf 2", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: 8})}})
	wantSound(t, d)
}

func TestDryRunSaysTheSameAndKeepsNothing(t *testing.T) {
	d := stocked(t, 10)
	before := contents(t, d)
	intake := Intake{DryRun: true, Files: []IntakeFile{file("a.csv",
		inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: 5, Note: "x", UnitCost: micros(1)},
		inventory.Receipt{Part: ohms(t, 7), Quantity: 2})}}
	dry := book(t, d, intake)
	if after := contents(t, d); after != before {
		t.Errorf("a dry run changed the drawer:\n%s", after)
	}
	intake.DryRun = false
	if wet := book(t, d, intake); wet != dry {
		t.Errorf("the dry run said %+v, the booking %+v", dry, wet)
	}
}

func TestBookRefusesNonsenseAndKeepsNothing(t *testing.T) {
	timer, err := inventory.NewPart(inventory.Part{Kind: inventory.Timer, PartNumber: "NE555"})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name      string
		receipt   inventory.Receipt
		stocktake bool
		says      string
	}{
		{"nothing received", inventory.Receipt{Part: ohms(t, 1), Quantity: 0}, false, "at least one piece"},
		{"less than nothing received", inventory.Receipt{Part: ohms(t, 1), Quantity: -5}, false, "at least one piece"},
		{"less than nothing counted", inventory.Receipt{Part: ohms(t, 1), Quantity: -5}, true, "0 or more"},
		{"more than fits a number, received", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: math.MaxInt64}, false, "out of reason"},
		{"one more than a lot holds", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: MostPieces - 9}, false, "out of reason"},
		{"more than a lot holds, counted", inventory.Receipt{Part: ohms(t, 1), Quantity: MostPieces + 1}, true, "out of reason"},
		{"measured below zero", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, Measured: -1}, false, "measured value"},
		{"measured as no number", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, Measured: math.NaN()}, false, "measured value"},
		{"measured without end", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, Measured: math.Inf(1)}, false, "measured value"},
		{"a timer measured", inventory.Receipt{Part: timer, Quantity: 1, Measured: 5}, false, "no value to measure"},
		{"a part of no kind", inventory.Receipt{Part: inventory.Part{Kind: "coil"}, Quantity: 1}, false, "no kind of component"},
		{"a part of less than no value", inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: -1}, Quantity: 1}, false, "never negative"},
		{"a part of no number", inventory.Receipt{Part: inventory.Part{Kind: inventory.Resistor, Value: math.NaN()}, Quantity: 1}, false, "not a finite number"},
		{"a bin that does not print", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, Bin: "A\x001"}, false, `bin "A\x001" holds characters that do not print`},
		{"a note that is no text", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, Note: "\xff"}, false, `note "\xff" holds characters that do not print`},
		{"a cost below zero", inventory.Receipt{Part: ohms(t, 1), Quantity: 1, UnitCost: micros(-1)}, false, "unit cost"},
	} {
		t.Run(c.name, func(t *testing.T) {
			d := stocked(t, 10)
			before := contents(t, d)
			good := inventory.Receipt{Part: ohms(t, 3), Quantity: 1}
			_, err := d.Book(context.Background(), Intake{Stocktake: c.stocktake, Files: []IntakeFile{file("x.csv", good, c.receipt)}})
			wantReason(t, err, inventory.Invalid, c.says)
			if after := contents(t, d); after != before {
				t.Errorf("refused, and yet changed:\n%s", after)
			}
		})
	}
}

// A disk that fills up at any page of a booking leaves the drawer as it was.
func TestFullDiskLeavesTheDrawerAsItWas(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 1000, 1000)
	kit := planned(t, d, inventory.Pick{Lot: 1, Quantity: 4}, inventory.Pick{Lot: 2, Quantity: 4})
	var receipts []inventory.Receipt
	for i := range 300 {
		receipts = append(receipts, inventory.Receipt{Part: ohms(t, float64(100+i)), Bin: "B", Quantity: 5, Note: strings.Repeat("n", 100)})
	}
	before := contents(t, d)
	var pages int64
	if err := d.db.QueryRow("PRAGMA page_count").Scan(&pages); err != nil {
		t.Fatal(err)
	}
	refused := 0
	for most := pages; ; most++ {
		if _, err := d.db.Exec("PRAGMA max_page_count = " + strconv.FormatInt(most, 10)); err != nil {
			t.Fatal(err)
		}
		_, err := d.Book(ctx, Intake{Files: []IntakeFile{file("rows.csv", receipts...)}})
		if err == nil {
			break
		}
		refused++
		wantReason(t, err, inventory.Invalid, "the disk is full", "nothing was changed")
		if after := contents(t, d); after != before {
			t.Fatalf("at %d pages the drawer has changed:\n%s", most, after)
		}
	}
	if refused < 10 {
		t.Errorf("the disk was full %d times only", refused)
	}
	if _, err := d.Pull(ctx, kit); err != nil {
		t.Error(err)
	}
	wantSound(t, d)
}

func TestErrorsCarryTheirReasonThroughTheLayers(t *testing.T) {
	d := fresh(t)
	_, err := d.Lot(context.Background(), 5)
	wantReason(t, err, inventory.NotFound, "there is no lot 5", "tickdrawer stock")
	var e *inventory.Error
	if !errors.As(err, &e) {
		t.Error("not an inventory.Error")
	}
}
