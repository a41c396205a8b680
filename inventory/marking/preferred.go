package marking

import "math"

// irregular holds the E24 values that differ from the rounded geometric series
// 10^(n/24); IEC 60063 keeps them from an older practice.
var irregular = map[int]int{10: 27, 11: 30, 12: 33, 13: 36, 14: 39, 15: 43, 16: 47, 22: 82}

// Preferred returns the preferred numbers of one decade of IEC 60063:2015 for
// the series 3, 6, 12 or 24 (two digits, 10 to 91) and 48, 96 or 192 (three
// digits, 100 to 988), ascending; nil for any other series.
func Preferred(series int) []int {
	var full, count int
	switch series {
	case 3, 6, 12, 24:
		full, count = 24, 24
	case 48, 96, 192:
		full, count = 192, 192
	default:
		return nil
	}
	step := count / series
	numbers := make([]int, 0, series)
	for n := 0; n < full; n += step {
		numbers = append(numbers, preferredNumber(full, n))
	}
	return numbers
}

// preferredNumber returns the n-th number of E24 or E192.
func preferredNumber(full, n int) int {
	if full == 24 {
		if number, found := irregular[n]; found {
			return number
		}
		return int(math.Round(10 * math.Pow(10, float64(n)/24)))
	}
	// The table of IEC 60063 has 920 where the formula gives 919.
	if n == 185 {
		return 920
	}
	return int(math.Round(100 * math.Pow(10, float64(n)/192)))
}
