package inventory

import (
	"cmp"
	"strings"
)

// NaturalCompare returns the order of two texts as people count, negative where
// a comes first: runs of digits go by their number, so R2 precedes R10 and bin
// A9 bin A12. Texts of one order (R2, R02) go byte by byte, so 0 is for equal
// ones alone.
func NaturalCompare(a, b string) int {
	restA, restB := a, b
	for restA != "" && restB != "" {
		digitsA, digitsB := leadingDigits(restA), leadingDigits(restB)
		if digitsA == "" || digitsB == "" {
			if restA[0] != restB[0] {
				return cmp.Compare(restA[0], restB[0])
			}
			restA, restB = restA[1:], restB[1:]
			continue
		}
		// Without leading zeros the longer number is the larger.
		numberA, numberB := strings.TrimLeft(digitsA, "0"), strings.TrimLeft(digitsB, "0")
		if order := cmp.Or(cmp.Compare(len(numberA), len(numberB)), cmp.Compare(numberA, numberB)); order != 0 {
			return order
		}
		restA, restB = restA[len(digitsA):], restB[len(digitsB):]
	}
	return cmp.Or(cmp.Compare(len(restA), len(restB)), cmp.Compare(a, b))
}

// leadingDigits returns the run of ASCII digits that the text begins with.
func leadingDigits(text string) string {
	end := 0
	for end < len(text) && '0' <= text[end] && text[end] <= '9' {
		end++
	}
	return text[:end]
}
