package marking

import "math"

// e24 is the decade of E24. Where it departs from the rounded geometric series,
// IEC 60063 keeps the values of an older practice.
var e24 = [24]int{10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91}

// Preferred returns the preferred numbers of one decade of IEC 60063:2015 for
// the series 3, 6, 12 or 24 (two digits, 10 to 91) and 48, 96 or 192 (three
// digits, 100 to 988), ascending; nil for any other series.
func Preferred(series int) []int {
	switch series {
	case 3, 6, 12, 24:
		return every(len(e24)/series, e24[:])
	case 48, 96, 192:
		return every(192/series, e192())
	}
	return nil
}

// every returns every step-th of the numbers, from the first on.
func every(step int, numbers []int) []int {
	var taken []int
	for i := 0; i < len(numbers); i += step {
		taken = append(taken, numbers[i])
	}
	return taken
}

// e192 returns the decade of E192: 100 times 10^(n/192), rounded, but for 920,
// where the formula gives 919.
func e192() []int {
	numbers := make([]int, 192)
	for n := range numbers {
		numbers[n] = int(math.Round(100 * math.Pow(10, float64(n)/192)))
	}
	numbers[185] = 920
	return numbers
}
