package marking

import (
	"math"
	"slices"
	"testing"
)

// IEC 60063:2015. The rule is checked against what published tables agree on:
// E24 departs from the rounded series at 2.7 3.0 3.3 3.6 3.9 4.3 4.7 8.2, E192
// only at 9.20 (formula 9.19; ten public tables), and each series is every second
// value of the next finer one.
func TestPreferredNumbersFollowThePublishedTables(t *testing.T) {
	for series, want := range map[int][]int{
		3:  {10, 22, 47},
		6:  {10, 15, 22, 33, 47, 68},
		12: {10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82},
	} {
		if got := Preferred(series); !slices.Equal(got, want) {
			t.Errorf("E%d = %v, want %v", series, got, want)
		}
	}
	var departures []int
	for n, number := range Preferred(24) {
		if number != int(math.Round(10*math.Pow(10, float64(n)/24))) {
			departures = append(departures, number)
		}
	}
	if want := []int{27, 30, 33, 36, 39, 43, 47, 82}; !slices.Equal(departures, want) {
		t.Errorf("E24 departs from the rounded series at %v, want %v", departures, want)
	}
	departures = nil
	for n, number := range Preferred(192) {
		if number != int(math.Round(100*math.Pow(10, float64(n)/192))) {
			departures = append(departures, number)
		}
	}
	if want := []int{920}; !slices.Equal(departures, want) {
		t.Errorf("E192 departs from the rounded series at %v, want %v", departures, want)
	}
	for _, finer := range []int{6, 12, 24, 96, 192} {
		if got, want := Preferred(finer/2), every(2, Preferred(finer)); !slices.Equal(got, want) {
			t.Errorf("E%d = %v, want every second of E%d: %v", finer/2, got, finer, want)
		}
	}
}

// The EIA-96 code counts through E96: 01 is 100, 02 is 102, 25 is 178, 85 is 750,
// 96 is 976 (published code tables).
func TestE96CountsAsItsCodeDoes(t *testing.T) {
	e96 := Preferred(96)
	for index, want := range map[int]int{1: 100, 2: 102, 25: 178, 85: 750, 96: 976} {
		if got := e96[index-1]; got != want {
			t.Errorf("E96 number %d is %d, want %d", index, got, want)
		}
	}
	// Of E24 only six values are in E96 (computed from the public tables).
	var common []int
	for _, number := range Preferred(24) {
		if slices.Contains(e96, number*10) {
			common = append(common, number)
		}
	}
	if want := []int{10, 11, 13, 15, 20, 75}; !slices.Equal(common, want) {
		t.Errorf("E24 and E96 share %v, want %v", common, want)
	}
}

func TestPreferredNumbersAscendAndAreCounted(t *testing.T) {
	for _, series := range []int{3, 6, 12, 24, 48, 96, 192} {
		numbers := Preferred(series)
		if len(numbers) != series || !slices.IsSorted(numbers) || len(slices.Compact(slices.Clone(numbers))) != series {
			t.Errorf("E%d has %d numbers: %v", series, len(numbers), numbers)
		}
	}
	for _, series := range []int{-3, 0, 1, 5, 13, 384} {
		if numbers := Preferred(series); numbers != nil {
			t.Errorf("Preferred(%d) = %v, want nil", series, numbers)
		}
	}
	Preferred(24)[0] = 0
	if Preferred(24)[0] != 10 {
		t.Error("changing what Preferred returned changed the series")
	}
}
