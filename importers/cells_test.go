package importers

import (
	"strings"
	"testing"

	"tickdrawer/inventory"
)

func TestQuantityIsWholePieces(t *testing.T) {
	for _, test := range []struct {
		cell string
		want int64
	}{
		{"100", 100}, {" 100 ", 100}, {"100 pcs", 100}, {"100pcs.", 100}, {"100 Stück", 100}, {"100 St.", 100}, {"12x", 12}, {"5 pièces", 5}, {"7 UDS", 7},
		{"1 000", 1000}, {"1\u00a0000", 1000}, {"1\u202f000", 1000}, {"1'000", 1000}, {"1’000 pcs", 1000}, {"1 234 567", 1234567},
		{"1,000,000", 1000000}, {"1.000.000", 1000000}, {"1,000.00", 1000}, {"1.000,0", 1000}, {"1 000,000", 1000},
		{"100.0", 100}, {"100,00", 100}, {"007", 7}, {"10000000", 10000000},
	} {
		if got, err := countOf(test.cell, false); err != nil || got != test.want {
			t.Errorf("countOf(%q) = %d, %v, want %d", test.cell, got, err, test.want)
		}
	}
	if got, err := countOf("0", true); err != nil || got != 0 {
		t.Errorf("a stocktake's 0 = %d, %v", got, err)
	}
}

func TestQuantityRefusesWhatIsNotOne(t *testing.T) {
	for _, test := range []struct{ cell, want string }{
		{"1.000", "could be 1 or 1000: write 1 or 1000"}, {"1,000", "could be 1 or 1000"}, {"12,345", "could be 12.345 or 12345: write 12.3450 or 12345"}, {"1,000 pcs", "could be 1 or 1000"},
		{"-5", "never negative"}, {"−5", "never negative"}, {"- 5 pcs", "never negative"},
		{"0", "nothing came in"}, {"0.0", "nothing came in"}, {"000", "nothing came in"},
		{"2.5", "pieces are whole"}, {"0,5", "pieces are whole"}, {"1 000.5", "pieces are whole"},
		{"10000001", "out of reason"}, {"99999999999999999999999", "out of reason"}, {"1e9", "not a whole number"},
		{"ten", "not a whole number"}, {"~100", "not a whole number"}, {"100+", "not a whole number"}, {"+100", "not a whole number"}, {">100", "not a whole number"},
		{"100%", "not a whole number"}, {"100 €", "not a whole number"}, {"100.", "not a whole number"}, {".", "not a whole number"}, {"1 00", "not a whole number"}, {"1,00,000", "not a whole number"},
		{"2 reels", "not a whole number"}, {"1-10", "not a whole number"}, {"٣", "not a whole number"}, {"1,000'000", "not a whole number"}, {"'100", "not a whole number"},
	} {
		got, err := countOf(test.cell, false)
		if err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("countOf(%q) = %d, %v, want an error that contains %q", test.cell, got, err, test.want)
		}
	}
	if _, err := countOf("-1", true); err == nil {
		t.Error("a stocktake's -1 was read")
	}
}

func TestUnitCostIsExact(t *testing.T) {
	for _, test := range []struct {
		cell     string
		want     inventory.Micros
		currency string
	}{
		{"0.012", 12_000, ""}, {"0,012", 12_000, ""}, {".5", 500_000, ""}, {"0", 0, ""}, {"12", 12_000_000, ""},
		{"0.000001", 1, ""}, {"0.1234560", 123_456, ""}, {"1,2340", 1_234_000, ""}, {"1.5", 1_500_000, ""},
		{"$0.05", 50_000, "$"}, {"0,05 €", 50_000, "EUR"}, {"€ 0,05", 50_000, "EUR"}, {"EUR 0.05", 50_000, "EUR"}, {"0.05eur", 50_000, "EUR"}, {"US$ 1", 1_000_000, "USD"}, {"R$ 1,50", 1_500_000, "BRL"},
		{"$.05", 50_000, "$"}, {"Fr. 5.00", 5_000_000, "CHF"}, {"5 kr.", 5_000_000, "kr"}, {"12,50 zł", 12_500_000, "PLN"}, {"£0.3", 300_000, "GBP"},
		{"1,234.56", 1_234_560_000, ""}, {"1.234,56", 1_234_560_000, ""}, {"1 234,567", 1_234_567_000, ""}, {"100000", 100_000_000_000, ""},
	} {
		got, currency, err := costOf(test.cell)
		if err != nil || got != test.want || currency != test.currency {
			t.Errorf("costOf(%q) = %d, %q, %v, want %d, %q", test.cell, got, currency, err, test.want, test.currency)
		}
	}
}

func TestUnitCostRefusesWhatIsNotOne(t *testing.T) {
	for _, test := range []struct{ cell, want string }{
		{"1,234", "could be 1.234 or 1234: write 1.2340 or 1234"}, {"$12.500", "could be 12.5 or 12500: write 12.5000 or 12500"},
		{"0.1234567", "at most 6 digits"}, {"-1", "never negative"}, {"1.2.3", "not an amount"}, {"1,23,4.5", "not an amount"}, {"cheap", "not an amount"},
		{"Fr.5", "not an amount"}, {"5 ct", "not an amount"}, {"1e-3", "not an amount"}, {"0.05 €/10", "not an amount"}, {"€", "not an amount"}, {"5.", "not an amount"},
		{"100000.01", "out of reason"}, {"99999999999999999999", "out of reason"}, {"$ € 5", "not an amount"},
	} {
		if got, _, err := costOf(test.cell); err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("costOf(%q) = %d, %v, want an error that contains %q", test.cell, got, err, test.want)
		}
	}
}

func TestTempcoIsInPPM(t *testing.T) {
	for _, test := range []struct {
		cell string
		want float64
	}{
		{"100", 100}, {"±100 ppm", 100}, {"+/-50", 50}, {"100ppm/K", 100}, {"100 PPM/°C", 100}, {"-750", -750}, {"−200 ppm/C", -200}, {"+350", 350}, {"0", 0},
		{"0±30", 30}, {"0 ± 30 ppm/K", 30}, {"2,5", 2.5}, {"15 ppm per K", 15},
	} {
		if got, err := tempcoOf(test.cell); err != nil || got != test.want {
			t.Errorf("tempcoOf(%q) = %g, %v, want %g", test.cell, got, err, test.want)
		}
	}
	for _, cell := range []string{"warm", "100 %", "1,500", "1e3", "100 ppm/V", "--5", "10±5", "ppm", "9999999", "±"} {
		if got, err := tempcoOf(cell); err == nil {
			t.Errorf("tempcoOf(%q) = %g, want an error", cell, got)
		}
	}
}

func TestKindShowsInTheUnitOnlyWhereItIsUnmistakable(t *testing.T) {
	for _, test := range []struct {
		value string
		want  inventory.Kind
	}{
		{"4k7Ω", inventory.Resistor}, {"4.7 kΩ", inventory.Resistor}, {"4,7 kOhm", inventory.Resistor}, {"470 ohms", inventory.Resistor}, {"470R", inventory.Resistor}, {"4R7", inventory.Resistor}, {"R47", inventory.Resistor}, {"0R", inventory.Resistor},
		{"100nF", inventory.Capacitor}, {"0,1 µF", inventory.Capacitor}, {"0.1UF", inventory.Capacitor}, {"4n7F", inventory.Capacitor}, {"22 pF", inventory.Capacitor}, {"1mF", inventory.Capacitor},
		{"4k7", ""}, {"100n", ""}, {"104", ""}, {"104F", ""}, {"10M", ""}, {"1N4148", ""}, {"100µH", ""}, {"Ω", ""}, {"", ""}, {"RF", ""}, {"NE555", ""}, {"0.47F", ""}, {"74HC14", ""}, {"CR2032", ""},
	} {
		if got := kindOfUnit(test.value); got != test.want {
			t.Errorf("kindOfUnit(%q) = %q, want %q", test.value, got, test.want)
		}
	}
}
