package inventory

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestReferencesAreSortedAsPeopleCount(t *testing.T) {
	want := []string{"", "7", "10", "A", "C1", "D1", "R1", "R02", "R2", "R2a", "R2b", "R10", "R10a", "R100", "R99999999999999999999999", "RV1", "ü1"}
	got := slices.Clone(want)
	slices.Reverse(got)
	slices.SortFunc(got, NaturalCompare)
	if !slices.Equal(got, want) {
		t.Errorf("sorted as %q", got)
	}
}

func TestNaturalOrderIsTotal(t *testing.T) {
	text := rapid.StringMatching(`[R0-2]{0,4}`)
	sign := func(x int) int { return min(max(x, -1), 1) }
	rapid.Check(t, func(t *rapid.T) {
		a, b, c := text.Draw(t, "a"), text.Draw(t, "b"), text.Draw(t, "c")
		ab, ba := sign(NaturalCompare(a, b)), sign(NaturalCompare(b, a))
		if ab != -ba || (ab == 0) != (a == b) {
			t.Fatalf("%q and %q: %d and %d", a, b, ab, ba)
		}
		if ab <= 0 && NaturalCompare(b, c) <= 0 && NaturalCompare(a, c) > 0 {
			t.Fatalf("%q ≤ %q ≤ %q, but not %q ≤ %q", a, b, c, a, c)
		}
	})
}
