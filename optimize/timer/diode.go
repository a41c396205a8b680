package timer

import "math"

// Diode is a diode's exponential law with its series resistance:
// i = SaturationA (exp(v/(Ideality·kT/q)) - 1), v without the drop on SeriesOhm.
// The figures hold at 27 °C. The zero Diode drops nothing and blocks wholly.
type Diode struct {
	SaturationA, Ideality, SeriesOhm float64
}

// Constants of the exponential law. Boltzmann's constant over the elementary
// charge is exact since the SI of 2019; the temperature exponent and the
// activation energy are SPICE's defaults for silicon (XTI, EG), which ngspice
// uses where a model does not state them.
const (
	zeroCelsiusK      = 273.15
	modelK            = 300.15 // 27 °C
	boltzmannVPerK    = 1.380649e-23 / 1.602176634e-19
	saturationExp     = 3.0
	activationEnergyV = 1.11
)

// junction is a diode at a temperature: i = saturationA (exp(w) - 1) with
// w = v/slopeV, behind seriesOhm. The zero junction drops nothing.
type junction struct{ saturationA, slopeV, seriesOhm float64 }

// at returns the diode at an ambient temperature: slopeV is N·kT/q and
// IS(T) = IS (T/Tnom)^(XTI/N) exp((T/Tnom - 1) EG/(N·kT/q)), as SPICE has it.
func (d Diode) at(ambientC float64) junction {
	if d.SaturationA == 0 {
		return junction{}
	}
	kelvin := ambientC + zeroCelsiusK
	j := junction{d.SaturationA, d.Ideality * boltzmannVPerK * kelvin, d.SeriesOhm}
	if kelvin != modelK {
		ratio := kelvin / modelK
		j.saturationA *= math.Exp(saturationExp/d.Ideality*math.Log(ratio) + (ratio-1)*activationEnergyV/j.slopeV)
	}
	return j
}

// At returns the diode that is at 27 °C what d is at an ambient temperature: for
// computing with many values at one temperature.
func (d Diode) At(ambientC float64) Diode {
	if d.SaturationA == 0 {
		return d
	}
	return Diode{d.at(ambientC).saturationA, d.Ideality * (ambientC + zeroCelsiusK) / modelK, d.SeriesOhm}
}

// solveW returns the w ≥ 0 at which p (exp(w)-1) + q w = drop, for p ≥ 0,
// q > 0, drop ≥ 0. The left side is convex and rising: from above its root
// Newton's steps fall to it and never pass it.
func solveW(p, q, drop float64) float64 {
	high := drop / q
	if p == 0 {
		return min(high, largestW)
	}
	if byExponential := log1p(drop / p); byExponential < high {
		high = byExponential
		// The fixed point w = ln(1 + (drop - q w)/p) alternates about the root: two
		// steps from above are above again, and close where the resistance prevails.
		if w := log1p(max(drop-q*high, 0) / p); w > 0 {
			high = min(high, log1p((drop-q*w)/p))
		}
	}
	w := min(high, largestW)
	for range 60 {
		grown := expm1(w)
		step := (p*grown + q*w - drop) / (p*grown + p + q)
		w -= step
		if step*step <= enough*w {
			break
		}
	}
	return max(w, 0)
}

// enough ends Newton's steps: the error after a step is at most half its square,
// as the second derivatives here do not exceed the first.
const enough = 1e-15

// expm1 returns exp(w)-1, by the faster exp where nothing cancels.
func expm1(w float64) float64 {
	if w > 1 {
		return math.Exp(w) - 1
	}
	return math.Expm1(w)
}

// log1p returns ln(1+x), by the faster logarithm where nothing is lost.
func log1p(x float64) float64 {
	if x > 1 {
		return math.Log(1 + x)
	}
	return math.Log1p(x)
}

// largestW keeps exp(w) finite where nothing but the junction limits the current.
const largestW = 600

// blockingW bounds the error of taking a blocking diode's current as IS: with x
// slopes of reverse voltage it is IS (1 - exp(-x)), beside (exp(w)) IS that the
// conducting diode passes with it, so the relative error is exp(-(x + w)); below
// exp(-14), a millionth.
const blockingW = 14

// BlockingV returns the reverse voltage from which on the diode at 27 °C passes its
// saturation current, to a millionth, V.
func (d Diode) BlockingV() float64 { return blockingW * d.at(modelK-zeroCelsiusK).slopeV }

// blocks reports whether the reverse biased diode behind other ohm passes its
// saturation current, to a millionth of all that flows, while drop remains and
// the conducting diode is at w.
func (d junction) blocks(other, drop, w float64) bool {
	return (drop-d.saturationA*other)/d.slopeV+w >= blockingW
}

// seriesRampS returns the time in which the voltage between a source and the
// capacitor falls from drop0 to drop1 while the source drives it through source
// ohm and from there through r and a diode, s; +Inf where drop1 is not positive.
// A like diode the other way round, behind other ohm, is reverse biased all the
// while and passes its saturation current IS. With w = ln(1 + i/IS) the law
// drop = i R + slope w turns t = C ∫ dv/(i + IS) into
//
//	t = C [ R (w0 - w1) + slope/IS (exp(-w1) - exp(-w0)) ]
//
// Where the voltage is too small to block the other diode the law is integrated
// with both solved.
func (d junction) seriesRampS(r, other, source, farads, drop0, drop1 float64) float64 {
	if drop1 <= 0 {
		return math.Inf(1)
	}
	r += source
	if d.saturationA == 0 {
		return r * farads * math.Log(drop0/drop1)
	}
	r += d.seriesOhm
	other += source + d.seriesOhm
	p := r * d.saturationA
	w0, w1 := solveW(p, d.slopeV, drop0), solveW(p, d.slopeV, drop1)
	if !d.blocks(other, drop1, w1) {
		return farads * d.leakyOhm(r, other, w0, w1)
	}
	shared := d.saturationA * source // that the leakage drops on the source's own resistance
	if shared > 0 && shared < drop1 {
		w0 -= shared / (p*math.Exp(w0) + d.slopeV)
		w1 -= shared / (p*math.Exp(w1) + d.slopeV)
	}
	return farads * (r*(w0-w1) + d.slopeV/d.saturationA*(math.Exp(-w1)-math.Exp(-w0)))
}

// leakyOhm returns ∫ dv/i for seriesRampS with the reverse biased diode's
// current solved at every voltage, ohm. A panel spans some four slopes of the
// voltage, over which that current may come up from nothing.
func (d junction) leakyOhm(r, other, w0, w1 float64) float64 {
	sum := 0.0
	for low := w1; low < w0; {
		high := min(panelEnd(low, w0), low+4*d.slopeV/(r*d.saturationA*math.Exp(low)+d.slopeV))
		middle, half := (high+low)/2, (high-low)/2
		for i, node := range legendreNodes {
			for _, w := range [2]float64{middle - half*node, middle + half*node} {
				grown := d.saturationA * expm1(w)
				slope := r*(grown+d.saturationA) + d.slopeV
				sum += half * legendreWeights[i] * slope / (grown + d.reverseA(other, r*grown+d.slopeV*w))
			}
		}
		low = high
	}
	return sum
}

// reverseA returns the current that drop drives through r and the reverse biased
// diode, A.
func (d junction) reverseA(r, drop float64) float64 {
	return d.saturationA * -math.Expm1(-solveReverse(r*d.saturationA, d.slopeV, drop))
}

// solveReverse returns the x ≥ 0 at which p (1-exp(-x)) + q x = drop, for p ≥ 0,
// q > 0, drop ≥ 0. The left side is concave and rising: from below its root
// Newton's steps climb to it and never pass it.
func solveReverse(p, q, drop float64) float64 {
	x := max((drop-p)/q, drop/(p+q))
	for range 60 {
		passed := -math.Expm1(-x)
		step := (drop - p*passed - q*x) / (p*(1-passed) + q)
		x += step
		if step*step <= enough*x {
			break
		}
	}
	return x
}

// leakingRampS returns the time in which the voltage between the capacitor and a
// sink falls from drop0 to drop1 while rb, with the reverse biased diode across
// it, and sink ohm discharge it, s; +Inf where drop1 is not positive.
//
// A diode that passes its whole saturation current is a source across rb, which
// is a voltage IS rb in series with it. With less voltage u across the two, the
// current is i = u/rb + IS (1 - exp(-u/slope)), and
// t = C [ sink ln(i0/i1) + ∫ du/i ].
func (d junction) leakingRampS(sink, rb, farads, drop0, drop1 float64) float64 {
	if drop1 <= 0 {
		return math.Inf(1)
	}
	if d.saturationA == 0 || rb == 0 {
		return (rb + sink) * farads * math.Log(drop0/drop1)
	}
	p, q := sink*d.saturationA, d.slopeV*(1+sink/rb)
	x1 := solveReverse(p, q, drop1)
	if x1+math.Log1p(x1*d.slopeV/(rb*d.saturationA)) >= fullyBlockingX {
		shift := d.saturationA * rb
		return (rb + sink) * farads * math.Log((drop0+shift)/(drop1+shift))
	}
	x0 := solveReverse(p, q, drop0)
	i0, i1 := d.leakingA(rb, x0), d.leakingA(rb, x1)
	return farads * (sink*math.Log(i0/i1) + d.leakingOhm(rb, x0, x1))
}

// fullyBlockingX is blockingW for leakingRampS, where both forms meet closely
// enough for the search's bounds.
const fullyBlockingX = 30

// leakingA returns the current through rb and the diode across it with x slopes
// of reverse voltage, A.
func (d junction) leakingA(rb, x float64) float64 {
	return x*d.slopeV/rb - d.saturationA*math.Expm1(-x)
}

// leakingOhm returns ∫ du/i for leakingRampS, ohm. The integrand has poles near
// ±2πi, and is like 1/x near zero; see panelEnd.
func (d junction) leakingOhm(rb, x0, x1 float64) float64 {
	sum := 0.0
	for low := x1; low < x0; {
		high := min(x0, low+3, 1.7*low)
		middle, half := (high+low)/2, (high-low)/2
		for i, node := range legendreNodes {
			sum += half * legendreWeights[i] * d.slopeV * (1/d.leakingA(rb, middle-half*node) + 1/d.leakingA(rb, middle+half*node))
		}
		low = high
	}
	return sum
}

// panelEnd returns where the panel of a quadrature over w that begins at low
// ends. The integrands turn over like 1/(1+exp(w)), with poles π from the axis,
// and are like 1/w near zero. With the panel's half as the unit, the poles lie
// outside the ellipse whose half-axes sum to 7.5: eight points err by 7.5^-16,
// below 1e-13.
func panelEnd(low, end float64) float64 { return min(end, low+1.6, 1.7*low) }

// bypassRampS returns the time in which the voltage between the supply and the
// capacitor falls from drop0 to drop1 while the supply drives it through ra and
// then rb with the diode across it, s; +Inf where drop1 is not positive.
func (d junction) bypassRampS(ra, rb, farads, drop0, drop1 float64) float64 {
	if drop1 <= 0 {
		return math.Inf(1)
	}
	if d.saturationA == 0 || rb == 0 {
		return ra * farads * math.Log(drop0/drop1)
	}
	share := 1 + ra/rb
	p, q := d.saturationA*(ra+d.seriesOhm*share), d.slopeV*share
	w0, w1 := solveW(p, q, drop0), solveW(p, q, drop1)
	i0, i1 := d.bypassA(rb, w0), d.bypassA(rb, w1)
	return farads * (ra*math.Log(i0/i1) + d.bypassOhm(rb, w0, w1))
}

// seriesA returns the current that drop drives through r and the diode, A.
func (d junction) seriesA(r, drop float64) float64 {
	if d.saturationA == 0 {
		return drop / r
	}
	return d.saturationA * math.Expm1(solveW((r+d.seriesOhm)*d.saturationA, d.slopeV, drop))
}

// bypassCurrents returns the current that drop drives through ra and then rb with
// the diode across it, and rb's part of it, A.
func (d junction) bypassCurrents(ra, rb, drop float64) (all, throughRB float64) {
	if d.saturationA == 0 || rb == 0 {
		return drop / ra, 0
	}
	share := 1 + ra/rb
	w := solveW(d.saturationA*(ra+d.seriesOhm*share), d.slopeV*share, drop)
	return d.bypassA(rb, w), (d.saturationA*expm1(w)*d.seriesOhm + d.slopeV*w) / rb
}

// bypassA returns the current through the diode and rb together, A.
func (d junction) bypassA(rb, w float64) float64 {
	through := d.saturationA * expm1(w)
	return through + (through*d.seriesOhm+d.slopeV*w)/rb
}

// bypassOhm returns ∫ du/i from w1 to w0 over the voltage u on the diode and rb,
// ohm: ∫ (seriesOhm IS exp(w) + slope)/i(w) dw, by the Gauss-Legendre rule of
// eight points a panel.
func (d junction) bypassOhm(rb, w0, w1 float64) float64 {
	sum := 0.0
	for low := w1; low < w0; {
		high := panelEnd(low, w0)
		middle, half := (high+low)/2, (high-low)/2
		for i, node := range legendreNodes {
			for _, w := range [2]float64{middle - half*node, middle + half*node} {
				slope := d.seriesOhm*d.saturationA*math.Exp(w) + d.slopeV
				sum += half * legendreWeights[i] * slope / d.bypassA(rb, w)
			}
		}
		low = high
	}
	return sum
}

// The positive nodes and their weights of the eight-point Gauss-Legendre rule
// (DLMF section 3.5; the test holds them against the polynomials they are for).
var (
	legendreNodes   = [4]float64{0.1834346424956498, 0.5255324099163290, 0.7966664774136267, 0.9602898564975363}
	legendreWeights = [4]float64{0.3626837833783620, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763}
)
