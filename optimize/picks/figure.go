package picks

import (
	"math"
	"strconv"
	"strings"
)

// figure is a number with the digits that it is shown with.
type figure struct {
	number     float64
	decimals   int
	percent    bool // the number is a share
	scientific bool
}

// significant is how many digits of a figure are shown at least.
const significant = 4

// most decimals that a cell shows.
const mostDecimals = 9

// figuresFor returns a function that shows numbers of a size, all with the same
// decimals: four significant digits of the size, and three of the spread (0:
// none) between two limits, so that limits which differ look different.
func figuresFor(size, spread float64, percent bool) func(float64) figure {
	f := figure{percent: percent}
	if percent {
		size, spread = 100*size, 100*spread
	}
	digits := func(x float64, count int) int {
		if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) {
			return 0
		}
		return count - 1 - int(math.Floor(math.Log10(math.Abs(x))))
	}
	f.decimals = max(0, digits(size, significant), digits(spread, 3))
	if f.decimals > mostDecimals {
		f.decimals, f.scientific = max(significant-1, f.decimals-digits(size, 1)), !percent
	}
	f.decimals = min(f.decimals, mostDecimals)
	return func(x float64) figure {
		f.number = x
		return f
	}
}

// finite reports whether the number can stand in a cell.
func (f figure) finite() bool { return !math.IsInf(f.number, 0) && !math.IsNaN(f.number) }

// format returns the number format of the cell.
func (f figure) format() string {
	format := "0"
	if f.decimals > 0 {
		format += "." + strings.Repeat("0", f.decimals)
	}
	switch {
	case f.percent:
		return format + "%"
	case f.scientific:
		return format + "E+00"
	}
	return format
}

// text returns the number as the cell shows it, for measuring.
func (f figure) text() string {
	switch {
	case f.percent:
		return strconv.FormatFloat(100*f.number, 'f', f.decimals, 64) + "%"
	case f.scientific:
		return strconv.FormatFloat(f.number, 'e', f.decimals, 64)
	}
	return strconv.FormatFloat(f.number, 'f', f.decimals, 64)
}

// Digits of a number in a cell: what the format keeps, and what limits are given
// with. Those are more than an instrument shows and fewer than the noise of
// binary arithmetic, which would fail a reading at a limit.
const (
	cellDigits  = 15
	limitDigits = 12
)

// rounded returns x with so many digits.
func rounded(x float64, digits int) float64 {
	y, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
	return y
}

// shifted returns x · 10^power, exact in decimal: 0.0038 s is 3.8 ms and no
// neighbour, so that a reading at the limit passes.
func shifted(x float64, power int) float64 {
	if power == 0 || x == 0 || math.IsInf(x, 0) || math.IsNaN(x) {
		return x
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(x, 'e', -1, 64), "e")
	e, _ := strconv.Atoi(exponent)
	y, _ := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(e+power), 64)
	return y
}
