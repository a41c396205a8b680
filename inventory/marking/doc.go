// Package marking turns what is written on and about parts into numbers and
// back: values as IEC 60062 and the trade write them (4k7, R47, 100n, 0,1µF,
// 104), tolerances and their letters, and the preferred numbers of IEC 60063.
//
// Decimal text becomes the nearest float64: the prefix is folded into a decimal
// exponent before the one conversion, so 4k7, 4.7k and 4700 are the same number.
// What has two readings is refused with both of them named.
package marking
