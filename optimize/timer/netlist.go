package timer

type netlist struct{}
