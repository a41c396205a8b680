package timer

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"tickdrawer/optimize"
)

// netlist collects the lines of a SPICE netlist while a circuit wires itself
// around the timer. Node names are the circuit's own: vcc, cap, dis, out.
type netlist struct {
	lines   strings.Builder
	circuit *Circuit
	c       *Conditions
	values  Values
	placed  []optimize.Placed
	phases  Phases
	diodes  int // written so far

	triggerS float64 // when a trigger pulse comes; 0: the supply starts the circuit
}

// Netlist returns a complete SPICE netlist of the circuit, which ngspice runs in
// batch mode unchanged: every part of every network is an element of its own
// with a plain number, the timer is a subcircuit with the levels and drops of
// the conditions. It reports by .meas the times TH, TL, TP and FIRST (the first
// high time from an empty capacitor), or PULSE for a one-shot, in seconds; a
// circuit that does not oscillate makes ngspice report that a measurement failed.
//
// The placed networks name the circuit's positions, capacitor included; those of
// diodes are wired with the given law. A value that a network does not state is
// computed from its parts.
func Netlist(circuit *Circuit, c *Conditions, placed []optimize.Placed, diode Diode) string {
	n := &netlist{circuit: circuit, c: c, placed: placed}
	n.values.Diode = diode
	for i, position := range circuit.Resistors {
		n.values.Ohms[i] = networkValue(n.network(position), false)
	}
	n.values.Farads = networkValue(n.network("c"), true)
	n.phases = circuit.Phases(c, &n.values)

	n.head()
	circuit.wire(n)
	if circuit.Diodes > 0 {
		n.diodeModel()
	}
	n.subcircuit()
	n.analysis()
	return n.lines.String()
}

func (n *netlist) line(format string, args ...any) {
	fmt.Fprintf(&n.lines, format+"\n", args...)
}

// plain returns x as SPICE reads it without fail: no prefix letter.
func plain(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

func (n *netlist) head() {
	n.line("* %s with a timer %s at %s V and %s C: %s", n.circuit.Slug, n.c.Device.Name, plain(n.c.SupplyV), plain(n.c.AmbientC), n.circuit.Title)
	n.line("* run with: ngspice -b FILE")
	if n.circuit.OneShot {
		n.line("* reports PULSE, in seconds")
	} else {
		n.line("* reports the high time TH, the low time TL, the period TP, and FIRST, the first")
		n.line("* high time from an empty capacitor, in seconds")
	}
	if n.c.LoadA > 0 {
		n.line("* the output delivers %s A to a load: its high level below is under that load", plain(n.c.LoadA))
	}
	n.line("Vsupply vcc 0 %s", plain(n.c.SupplyV))
	if n.c.ControlV > 0 {
		n.line("Vcontrol ctl 0 %s", plain(n.c.ControlV))
	}
}

// network returns the network in a position. A position that is not placed is a
// broken invariant of the caller.
func (n *netlist) network(position string) *optimize.Network {
	for i := range n.placed {
		if n.placed[i].Position == position {
			return &n.placed[i].Network
		}
	}
	panic("timer: no network placed in position " + position + " of circuit " + n.circuit.Slug)
}

// networkValue returns what the parts of a network make together: ohm, or farad
// with reciprocal, where series and parallel change places.
func networkValue(network *optimize.Network, reciprocal bool) float64 {
	if network.Operator == optimize.Leaf {
		return network.Lot.Value()
	}
	adds := (network.Operator == optimize.Series) != reciprocal
	sum := 0.0
	for i := range network.Members {
		value := networkValue(&network.Members[i], reciprocal)
		if !adds {
			value = 1 / value
		}
		sum += value
	}
	if !adds {
		return 1 / sum
	}
	return sum
}

// resistor writes the parts of a position between two nodes.
func (n *netlist) resistor(position, from, to string) {
	n.place(n.network(position), "R"+position, position, from, to, func(ohm, _ float64) string {
		return plain(max(ohm, 1e-6)) // SPICE knows no resistor of 0 ohm
	}, 0)
}

// capacitor writes the timing capacitor's parts, charged to startV.
func (n *netlist) capacitor(startV float64) {
	n.place(n.network("c"), "C", "cap", "cap", "0", func(farads, startV float64) string {
		return plain(farads) + " ic=" + plain(startV)
	}, startV)
}

// place writes the parts of a network between two nodes. A lone part bears the
// name, several are numbered; so are the nodes inside a string. startV is shared
// out along strings as capacitors share it.
func (n *netlist) place(network *optimize.Network, name, nodeName, from, to string, value func(value, startV float64) string, startV float64) {
	parts, nodes := 0, 0
	var write func(w *optimize.Network, from, to string, startV float64)
	write = func(w *optimize.Network, from, to string, startV float64) {
		switch w.Operator {
		case optimize.Leaf:
			parts++
			element := name
			if network.Operator != optimize.Leaf {
				element += fmt.Sprintf("_%d", parts)
			}
			n.line("%s %s %s %s", element, from, to, value(w.Lot.Value(), startV))
		case optimize.Parallel:
			for i := range w.Members {
				write(&w.Members[i], from, to, startV)
			}
		case optimize.Series:
			whole := networkValue(w, true)
			for i := range w.Members {
				next := to
				if i < len(w.Members)-1 {
					nodes++
					next = fmt.Sprintf("%s_%d", nodeName, nodes)
				}
				write(&w.Members[i], from, next, startV*whole/networkValue(&w.Members[i], true))
				from = next
			}
		}
	}
	write(network, from, to, startV)
}

// diode writes one of the circuit's diodes; the zero Diode conducts forward
// through next to nothing.
func (n *netlist) diode(anode, cathode string) {
	n.diodes++
	if n.values.Diode.SaturationA == 0 {
		n.line("Bd%d %s %s I=%s*max(V(%s,%s),0)", n.diodes, anode, cathode, plain(1/leastOhm), anode, cathode)
		return
	}
	n.line("D%d %s %s dmodel", n.diodes, anode, cathode)
}

// diodeModel writes the diode's law, with the temperature at which it holds.
func (n *netlist) diodeModel() {
	if d := n.values.Diode; d.SaturationA != 0 {
		n.line(".model dmodel D(is=%s n=%s rs=%s tnom=27)", plain(d.SaturationA), plain(d.Ideality), plain(d.SeriesOhm))
	}
}

// timer writes the timer with its trigger, threshold and discharge pins on the
// named nodes. state is its latch, 1 while the output is high.
func (n *netlist) timer(trigger, threshold, discharge string) {
	n.line("Xtimer 0 %s out ctl %s %s vcc state timer", trigger, threshold, discharge)
}

// subcircuit writes the timer: a divider of three equal resistors, a latch, an
// output with a level and a resistance either way, and the discharge switch.
//
// The latch is a switch with hysteresis. Its control is the threshold pin on a
// scale where the upper level is +1 and the lower one -1, so that the simulator,
// which shortens its steps as a switch's control nears its edge, meets the levels
// closely without short steps elsewhere. Below -0.9 the trigger pin takes over.
func (n *netlist) subcircuit() {
	c := n.c
	n.line("")
	n.line(".subckt timer gnd trig out ctl thr dis vcc state")
	n.line("Rtop vcc ctl 5000")
	n.line("Rmiddle ctl third 5000")
	n.line("Rbottom third gnd 5000")
	n.line("* control of the latch: +%s at the upper level, -%s at the lower one", plain(latchScaleV), plain(latchScaleV))
	n.line("Bthr thrlevel gnd V=(2*V(thr,gnd)-V(ctl,gnd)-V(third,gnd))/V(ctl,third)")
	n.line("Btrig triglevel gnd V=(2*V(trig,gnd)-V(ctl,gnd)-V(third,gnd))/V(ctl,third)")
	n.line("Blevel level gnd V=%s*(max(V(thrlevel,gnd),-0.9)+min(V(triglevel,gnd)+0.9,0))", plain(latchScaleV))
	n.line("Vset one gnd 1")
	n.line("Rset one state 1000")
	n.line("Slatch state gnd level gnd latch OFF")
	n.line(".model latch %s", latchSwitch(0))
	n.line("* output: %s V behind %s ohm high, %s V behind %s ohm low", plain(c.OutHighV), plain(c.OutHighOhm), plain(c.OutLowV), plain(c.OutLowOhm))
	n.line("Vhigh high gnd %s", plain(c.OutHighV))
	n.line("Shigh out high gnd level pullup OFF")
	n.line(".model pullup %s", latchSwitch(c.OutHighOhm))
	n.line("Vlow low gnd %s", plain(c.OutLowV))
	n.line("Slow out low level gnd pulldown OFF")
	n.line(".model pulldown %s", latchSwitch(c.OutLowOhm))
	n.line("* discharge switch: %s V behind %s ohm", plain(c.SwitchV), plain(c.SwitchOhm))
	n.line("Vdrop drop gnd %s", plain(c.SwitchV))
	n.line("Sdischarge dis drop level gnd discharge OFF")
	n.line(".model discharge %s", latchSwitch(c.SwitchOhm))
	n.line(".ends")
}

// latchSwitch returns the model of a switch that follows the latch.
func latchSwitch(ohm float64) string {
	return fmt.Sprintf("SW(vt=0 vh=%s ron=%s roff=1e12)", plain(latchScaleV), plain(max(ohm, leastOhm)))
}

const (
	latchScaleV = 1e4  // of the latch's control
	leastOhm    = 1e-3 // that stands in for no resistance
)

// shortestS returns the shortest phase that ends, s; the time constant of the
// charge where none does.
func (n *netlist) shortestS() float64 {
	shortest := math.Inf(1)
	for _, phaseS := range n.phaseTimes() {
		if phaseS > 0 {
			shortest = min(shortest, phaseS)
		}
	}
	if math.IsInf(shortest, 1) {
		return n.chargeS()
	}
	return shortest
}

func (n *netlist) phaseTimes() []float64 {
	if n.circuit.OneShot {
		return []float64{n.phases.HighS}
	}
	return []float64{n.phases.HighS, n.phases.LowS}
}

// chargeS returns the time constant of all the resistance with the capacitor, s.
func (n *netlist) chargeS() float64 {
	ohms := 1.0
	for _, ohm := range n.values.Ohms {
		ohms += ohm
	}
	return ohms * n.values.Farads
}

// firstChargeS returns how long the capacitor takes from empty to the upper
// level, s.
func (n *netlist) firstChargeS() float64 {
	empty := *n.c
	empty.LowLevelV = 0
	phases := n.circuit.Phases(&empty, &n.values)
	firstS := phases.HighS
	if n.circuit.Inverter {
		firstS = phases.LowS
	}
	if math.IsInf(firstS, 1) {
		return 5 * n.chargeS()
	}
	return firstS
}

// trigger writes a short pulse on the trigger pin, late enough for the circuit to
// have come to rest after power-up, whichever state that left the latch in.
func (n *netlist) trigger(node string) {
	pulseS := n.shortestS()
	n.triggerS = 2 * pulseS
	n.line("Vtrigger %s 0 PULSE(%s 0 %s %s %s %s)", node, plain(n.c.SupplyV),
		plain(n.triggerS), plain(pulseS/1e5), plain(pulseS/1e5), plain(pulseS/100))
}

// analysis writes the transient run and the measurements. Edges are those of the
// latch. An oscillator starts with the latch set and the capacitor empty, so its
// first edge is the end of the first high time, and no edge is in doubt.
func (n *netlist) analysis() {
	spanS, longestS := 0.0, 0.0
	for _, phaseS := range n.phaseTimes() {
		if math.IsInf(phaseS, 1) {
			phaseS = 5 * n.chargeS()
		}
		spanS += phaseS
		longestS = max(longestS, phaseS)
	}
	if n.circuit.OneShot {
		spanS = 1.2*spanS + n.triggerS
	} else {
		spanS = 2.1*spanS + n.firstChargeS()
	}
	n.line("")
	n.line(".options method=trap reltol=1e-5 abstol=1e-13 vntol=1e-6 trtol=1 temp=%s", plain(n.c.AmbientC))
	stepS := max(min(longestS/200, n.shortestS()/20), longestS/10000)
	n.line(".tran %s %s 0 %s uic", plain(stepS), plain(spanS), plain(stepS))
	n.line("")
	switch {
	case n.triggerS > 0:
		afterS := plain(0.99 * n.triggerS)
		n.line(".meas tran PULSE TRIG V(state) VAL=0.5 TD=%s RISE=1 TARG V(state) VAL=0.5 TD=%s FALL=1", afterS, afterS)
	case n.circuit.OneShot:
		n.line(".meas tran PULSE WHEN V(state)=0.5 FALL=1")
	case n.circuit.Inverter:
		n.line(".meas tran FIRST TRIG V(state) VAL=0.5 FALL=1 TARG V(state) VAL=0.5 RISE=1")
		n.line(".meas tran TH TRIG V(state) VAL=0.5 FALL=2 TARG V(state) VAL=0.5 RISE=2")
		n.line(".meas tran TL TRIG V(state) VAL=0.5 RISE=1 TARG V(state) VAL=0.5 FALL=2")
		n.line(".meas tran TP TRIG V(state) VAL=0.5 FALL=1 TARG V(state) VAL=0.5 FALL=2")
	default:
		n.line(".meas tran FIRST WHEN V(state)=0.5 FALL=1")
		n.line(".meas tran TH TRIG V(state) VAL=0.5 RISE=1 TARG V(state) VAL=0.5 FALL=2")
		n.line(".meas tran TL TRIG V(state) VAL=0.5 FALL=2 TARG V(state) VAL=0.5 RISE=2")
		n.line(".meas tran TP TRIG V(state) VAL=0.5 RISE=1 TARG V(state) VAL=0.5 RISE=2")
	}
	n.line(".end")
}
