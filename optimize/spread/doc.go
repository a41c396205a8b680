// Package spread tells how far the times of a circuit can stray: LotBand and
// NetworkBand give the least and the largest value of parts and of networks of
// them over tolerance and temperature, Evaluator the least and the largest of
// every time over those bands, the supply, the ambient temperature and what the
// data sheet says of the timer.
//
// # Why corners are enough
//
// Every time is an integral t = C ∫ dv/i(v) over the capacitor's voltage. At each
// voltage the current of a passive network falls as a resistor in its path rises
// and rises as one that works against it rises, so each phase rises or falls with
// each resistance throughout (timer.Trend), with the drops of the timer, and with
// the capacitance in proportion. A quantity that is monotone in every variable,
// in a direction that may depend on the others, takes its extremes over a box at
// corners of it: from any point, move one variable after the other to the end
// that does not lower the quantity. So high, low, first high and pulse times are
// evaluated at the corners, and so are the joint quantities, at whose corners both
// phases see the same parts:
//
//   - the period, where both phases rise or fall together with a resistor;
//   - the duty, where they move apart or one stands still; with RB of the classic
//     wirings and R of output-fed, where both rise, their ratio is a fraction of two
//     linear functions of the resistance, which is monotone.
//
// The period is not monotone in RA of the wirings with a discharge pin: the high
// time rises and the low time falls. There each 1/i is convex in RA, for it is
// (1 + D·RA)/(A·RA - B) with A, B, D positive and the pole below RA, and the high
// time is linear, so the period is convex: largest at an end, and its least value
// is found between the ends. With the diode across RB the high time is not linear,
// and the period is bounded by the high time at one end of RA with the low time
// at the other.
//
// Over the supply and the temperature each phase is monotone, and so is the period
// where both go the same way. The duty, their ratio, need not be where both depend
// on them, in the circuits with diodes and in output-fed: what it may gain half way
// between corners is estimated from the middle, and added. With a driven control
// pin the supply is meshed instead. Both are close, and no proof.
//
// Parts are taken as independent of each other, in temperature too: parts of one
// board need not be equally warm.
package spread
