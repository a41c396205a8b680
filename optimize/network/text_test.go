package network

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

func TestExpressionsReadAsNetworks(t *testing.T) {
	for _, test := range []struct {
		kind inventory.Kind
		text string
		want float64
	}{
		{inventory.Resistor, "10k", 10e3},
		{inventory.Resistor, "10k+4k7", 14.7e3},
		{inventory.Resistor, "10k|22k", 6875},
		{inventory.Resistor, "10k ∥ 22k", 6875},
		{inventory.Resistor, "(10k+4k7)|14.7k", 7350},
		{inventory.Resistor, "10k+22k|22k", 21e3}, // parallel binds tighter
		{inventory.Resistor, "10k±1%+4k7±5%", 14.7e3},
		{inventory.Resistor, "10k+-1%+4k7+/-5%", 14.7e3},
		{inventory.Resistor, "100+220+-5%", 320},
		{inventory.Capacitor, "100n+100n", 50e-9},
		{inventory.Capacitor, "100n|100n", 200e-9},
		{inventory.Capacitor, "4u7+20%-10%|4u7", 9.4e-6},
	} {
		n, err := Parse(test.kind, test.text)
		if err != nil {
			t.Errorf("%s: %v", test.text, err)
			continue
		}
		if math.Abs(n.Value/test.want-1) > 1e-12 {
			t.Errorf("%s: %g, want %g", test.text, n.Value, test.want)
		}
	}
}

func TestATolerancePartOfAnExpressionIsKept(t *testing.T) {
	n, err := Parse(inventory.Capacitor, "4u7+20%-10%|1u±5%")
	if err != nil {
		t.Fatal(err)
	}
	first, second := n.Members[0].Lot.Part.Tolerance, n.Members[1].Lot.Part.Tolerance
	if first == nil || first.Plus != 0.2 || first.Minus != 0.1 || second == nil || second.Plus != 0.05 {
		t.Errorf("tolerances %v and %v", first, second)
	}
}

func TestWhatIsNoExpressionIsPointedAt(t *testing.T) {
	for text, column := range map[string]int{
		"":          1,
		"10k+":      5,
		"(10k+4k7":  1,
		"10k)":      4,
		"10k||22k":  5,
		"10q+22k":   1,
		"10k+22q":   5,
		"0R":        1,
		"10k 22k|1": 1,
	} {
		_, err := Parse(inventory.Resistor, text)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) {
			t.Errorf("%q: %v, want a syntax error", text, err)
		} else if syntax.Column != column {
			t.Errorf("%q: column %d, want %d (%v)", text, syntax.Column, column, err)
		}
	}
}

func TestTextReadsBackAsTheSameNetwork(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOfN(rapid.SampledFrom([]float64{10, 47, 4700, 33e3, 2.2e6, 0.47}), 1, 4).Draw(t, "ohms")
		forest, err := Grow(resistors(2, values...), len(values))
		if err != nil {
			t.Fatal(err)
		}
		table := forest.Table(rapid.IntRange(1, len(values)).Draw(t, "parts"))
		tree := table.Network(rapid.IntRange(0, table.Len()-1).Draw(t, "row"))
		read, err := Parse(inventory.Resistor, Text(tree))
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(read.Value/tree.Value-1) > 1e-14 || read.Parts() != tree.Parts() {
			t.Fatalf("%s reads as %g with %d parts, was %g with %d", Text(tree), read.Value, read.Parts(), tree.Value, tree.Parts())
		}
	})
}

func FuzzParse(f *testing.F) {
	for _, seed := range []string{"10k+4k7", "10k|22k", "(10k+4k7)|22k", "4u7±10%", "4u7+20%-10%", "((", "+|", "1e999", "±%"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		n, err := Parse(inventory.Resistor, text)
		if err == nil && !(n.Value > 0) {
			t.Errorf("%q reads as %g", text, n.Value)
		}
		var syntax *SyntaxError
		if err != nil && (!errors.As(err, &syntax) || syntax.Column < 1 || syntax.Column > len(text)+1) {
			t.Errorf("%q: %v", text, err)
		}
		if err == nil && n.Operator != optimize.Leaf {
			n.Lots(func(l inventory.Lot) {
				if !(l.Value() > 0) {
					t.Errorf("%q has a member of %g", text, l.Value())
				}
			})
		}
	})
}
