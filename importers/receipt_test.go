package importers

import (
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

func TestReadFillsEveryField(t *testing.T) {
	var headings []string
	for _, f := range Fields() {
		headings = append(headings, string(f))
	}
	got := mustRead(t, strings.Join(headings, ";")+"\n"+
		"resistor;4k7;±1 %;100;A3;350 V;1/4W;;±50 ppm;0207;0,012;MFR-25;4,68k;from the fair;;;;\n"+
		"capacitor;104K;;20;B1;50;;X7R;;radial;;;98,7n;;;;;\n"+
		"diode;;;50;C2;100V;0.5W;;;DO-35;0.02;1n4148;;;1V;2.52n;1.752;0R568\n"+
		"timer;NE555;;5;D1;;;;;DIP-8;0.3;;;;;;;\n"+
		"potentiometer;100k;20%;3;;;;;;;;;;;;;;\n", Options{})
	if len(got.Problems) > 0 {
		t.Fatalf("problems %v", got.Problems)
	}
	ppm := 50.0
	micros := func(m inventory.Micros) *inventory.Micros { return &m }
	want := []inventory.Receipt{
		{Part: inventory.Part{Kind: inventory.Resistor, Value: 4700, Tolerance: &marking.Tolerance{Minus: 0.01, Plus: 0.01}, PartNumber: "MFR-25", RatingV: 350, RatingW: 0.25, TempcoPPM: &ppm, Package: "0207"},
			Bin: "A3", Measured: 4680, UnitCost: micros(12_000), Note: "from the fair", Quantity: 100},
		{Part: inventory.Part{Kind: inventory.Capacitor, Value: 100e-9, Tolerance: &marking.Tolerance{Minus: 0.1, Plus: 0.1}, RatingV: 50, Dielectric: "X7R", Package: "radial"},
			Bin: "B1", Measured: 98.7e-9, Quantity: 20},
		// 1N4148 model parameters (IS, N, RS) as published: 2.52n/1.752/.568.
		{Part: inventory.Part{Kind: inventory.Diode, PartNumber: "1N4148", RatingV: 100, RatingW: 0.5, Package: "DO-35", ForwardV: 1, SaturationA: 2.52e-9, Ideality: 1.752, SeriesOhm: 0.568},
			Bin: "C2", UnitCost: micros(20_000), Quantity: 50},
		{Part: inventory.Part{Kind: inventory.Timer, PartNumber: "NE555", Package: "DIP-8"}, Bin: "D1", UnitCost: micros(300_000), Quantity: 5},
		{Part: inventory.Part{Kind: inventory.Potentiometer, Value: 100e3, Tolerance: &marking.Tolerance{Minus: 0.2, Plus: 0.2}}, Quantity: 3},
	}
	for i, row := range got.Rows {
		if diff := cmp.Diff(want[i], row.Receipt); diff != "" {
			t.Errorf("line %d (-want +got):\n%s", row.Line, diff)
		}
	}
}

func TestReadTakesTheUnitOfAHeading(t *testing.T) {
	for _, test := range []struct {
		text string
		want inventory.Part
	}{
		{"kind;Value (nF);qty\nC;100;1", inventory.Part{Kind: inventory.Capacitor, Value: 100e-9}},
		{"kind;Value (nF);qty\nC;4,7;1", inventory.Part{Kind: inventory.Capacitor, Value: 4.7e-9}},
		{"kind;Value (nF);qty\nC;4u7;1", inventory.Part{Kind: inventory.Capacitor, Value: 4.7e-6}},
		{"µF;Stk\n4,7;1", inventory.Part{Kind: inventory.Capacitor, Value: 4.7e-6}},
		{"Kapazität in pF;Stk\n470;1", inventory.Part{Kind: inventory.Capacitor, Value: 470e-12}},
		{"kOhm;Stk\n4,7;1", inventory.Part{Kind: inventory.Resistor, Value: 4700}},
		{"Resistance;qty\n4k7;1", inventory.Part{Kind: inventory.Resistor, Value: 4700}},
		{"kind;Wert [kΩ];Menge (Stk.)\nR;4,7;1", inventory.Part{Kind: inventory.Resistor, Value: 4700}},
		{"kind;value;qty;Power/mW\nR;1k;1;250", inventory.Part{Kind: inventory.Resistor, Value: 1000, RatingW: 0.25}},
		{"kind;value;qty;TCR ppm/K;Voltage, kV\nR;1k;1;25;1,5", inventory.Part{Kind: inventory.Resistor, Value: 1000, RatingV: 1500, TempcoPPM: func() *float64 { x := 25.0; return &x }()}},
		{"kind;value;qty;Tol %\nR;1k;1;5", inventory.Part{Kind: inventory.Resistor, Value: 1000, Tolerance: &marking.Tolerance{Minus: 0.05, Plus: 0.05}}},
		{"kind;part number (maker's);qty;Is (nA)\nD;1N4148;1;2,52", inventory.Part{Kind: inventory.Diode, PartNumber: "1N4148", SaturationA: 2.52e-9}},
	} {
		got := mustRead(t, test.text, Options{})
		if len(got.Rows) != 1 {
			t.Errorf("%s: problems %v, unrecognised %v", test.text, got.Problems, got.Unrecognised)
			continue
		}
		if diff := cmp.Diff(test.want, got.Rows[0].Receipt.Part); diff != "" {
			t.Errorf("%s (-want +got):\n%s", test.text, diff)
		}
	}
}

func TestReadTakesTheUnitOfAHeadingThatThePersonNames(t *testing.T) {
	got := mustRead(t, "kind;Rated (nF);qty;Max (mW)\nC;100;1;50\n", Options{Columns: map[string]string{"Rated (nF)": "value", "Max (mW)": "rating_w"}})
	if len(got.Rows) != 1 || got.Rows[0].Receipt.Part.Value != 100e-9 || got.Rows[0].Receipt.Part.RatingW != 0.05 {
		t.Errorf("rows %+v, problems %v", got.Rows, got.Problems)
	}
}

func TestReadDoesNotRecogniseAHeadingThatChangesTheNumber(t *testing.T) {
	for _, heading := range []string{"Quantity (reels)", "Price (per 100)", "Value (nominal)", "Value (kF)", "Tolerance (ppm)", "Box price", "Total price", "Qty per box", "Part", "Number", "Amount"} {
		if c := (headingReader{}).column(heading); c.Field != "" {
			t.Errorf("%q was taken for %s", heading, c.Field)
		}
	}
}

func TestReadReportsRowProblems(t *testing.T) {
	const headings = "kind;value;tolerance;quantity;part_number;forward_v;measured;note;bin\n"
	for _, test := range []struct{ row, column, want string }{
		{"wire;1k;;1", "kind", "kinds are resistor"},
		{";1k;;1", "kind", "the kind is missing"},
		{"R;;;1", "value", "the value is missing"},
		{"D;;;1", "part_number", "the part number is missing"},
		{"C;470;;1", "value", "47 pF"}, // and 470 pF: both readings named
		{"C;100 nF 50 V;;1", "value", ""},
		{"C;0;;1", "value", ""},
		{"R;1k;;", "quantity", "the quantity is missing"},
		{"R;1k;;-", "quantity", "the quantity is missing"},
		{"C;104K;5%;1", "tolerance", "the letter after the value says ±10 %, this cell ±5 %"},
		{"R;1k;100%;1", "tolerance", ""},
		{"R;1k;;1;;0,7", "forward_v", "belongs to a diode"},
		{"R;1k;;1;;;0", "measured", "above 0"},
		{"R;1k;;1;;;100n", "measured", ""},
		{"R;1k;;1;;;;#REF!", "note", "spreadsheet's error"},
		{"R;1k;;1;;;;;A\uFFFD1", "bin", "lost"},
		{"R;1k;;1;;;;;A\u009B1", "bin", "does not print"},
		{"R;1k;;1;;;;;" + strings.Repeat("x", MaxTextBytes+1), "bin", "longer than 200 bytes"},
		{"R;4,7k;;1;;;;;;surplus", "", "more cells than there are headings (9)"},
	} {
		got := mustRead(t, headings+test.row+"\n", Options{})
		if len(got.Problems) != 1 || got.Problems[0].Column != test.column || !strings.Contains(got.Problems[0].Reason, test.want) {
			t.Errorf("%s: problems %v, want one with %q that contains %q", test.row, got.Problems, test.column, test.want)
		}
	}
}

func TestReadWantsOneCurrency(t *testing.T) {
	got := mustRead(t, "kind,value,quantity,price\nR,1k,1,0.1\nR,2k,1,$0.1\nR,3k,1,0.1 €\nR,4k,1,$0.2\n", Options{})
	if got.Currency != "$" || len(got.Rows) != 3 || len(got.Problems) != 1 || !strings.Contains(got.Problems[0].Reason, "the cost is in EUR, the one on line 3 in $") {
		t.Errorf("currency %q, problems %v", got.Currency, got.Problems)
	}
}

func TestReadTakesTheKindFromThePersonLast(t *testing.T) {
	got := mustRead(t, "value,quantity\n4k7,1\n100nF,2\n", Options{Kind: inventory.Resistor})
	if len(got.Rows) != 2 || got.Rows[0].Receipt.Part.Kind != inventory.Resistor || got.Rows[1].Receipt.Part.Kind != inventory.Capacitor {
		t.Errorf("rows %+v, problems %v", got.Rows, got.Problems)
	}
	got = mustRead(t, "value,quantity\n4k7,1\n100nF,2\n", Options{})
	if len(got.Rows) != 1 || !strings.Contains(got.Problems[0].Reason, "write the value with its unit") {
		t.Errorf("rows %+v, problems %v", got.Rows, got.Problems)
	}
}

func TestReadKeepsWhatAPartNumberLeavesOver(t *testing.T) {
	got := mustRead(t, "kind,value,part no,tolerance,measured,quantity,package\nD,5V1,BZX55,5%,5.08,10,\"=\"\"0805\"\"\"\n", Options{})
	if len(got.Rows) != 1 {
		t.Fatalf("problems %v", got.Problems)
	}
	r := got.Rows[0].Receipt
	if r.Part.PartNumber != "BZX55" || r.Note != "value: 5V1; tolerance: 5%; measured: 5.08" || r.Part.Package != "0805" {
		t.Errorf("receipt %+v", r)
	}
}

func TestSynonymsNameOneFieldEach(t *testing.T) {
	seen := map[string]Field{}
	for field, headings := range synonyms {
		for _, heading := range headings {
			folded := fold(heading)
			if other, found := seen[folded]; found {
				t.Errorf("%q stands for %s and %s", heading, other, field)
			}
			seen[folded] = field
			if strings.ToLower(heading) != heading {
				t.Errorf("%q is not in lower case", heading)
			}
			if c := (headingReader{}).column(strings.ToUpper(heading)); c.Field != field {
				t.Errorf("%q is read as %q, want %s", strings.ToUpper(heading), c.Field, field)
			}
		}
	}
	for heading := range kindHeadings {
		if seen[fold(heading)] != FieldValue {
			t.Errorf("%q is no heading of a value", heading)
		}
	}
	for _, field := range Fields() {
		if _, found := synonyms[field]; !found {
			t.Errorf("%s has no synonyms", field)
		}
	}
	if len(synonyms) != len(Fields()) {
		t.Errorf("synonyms for %d fields of %d", len(synonyms), len(Fields()))
	}
}

func TestNearestFieldIsSuggestedBySpelling(t *testing.T) {
	for heading, want := range map[string]Field{
		"quantitty": FieldQuantity, "Qtty": FieldQuantity, "Toleranze": FieldTolerance, "Lagerortt": FieldBin, "Total quantity": FieldQuantity,
		"Price (per 100)": FieldUnitCost, "Farbe": "", "Xyzzy": "", "": "", "№": "",
	} {
		if got := nearestField(heading); got != want {
			t.Errorf("nearestField(%q) = %q, want %q", heading, got, want)
		}
	}
}
