// Package network enumerates the two-terminal series/parallel networks that a
// stock of parts can form, and writes and reads them as text (10k+4k7, 10k|22k,
// brackets).
//
// A network is canonical: its members are never of its own operator and stand
// in the order of their numbers, so each combination of pieces is formed once.
// Bridges are out of scope. For n unlike parts there are 1, 2, 8, 52, ...
// networks (OEIS A006351), for n like ones 1, 2, 4, 10, ... shapes (A000084).
package network
