package timer

// Device is a timer family as its data sheet gives it.
type Device struct {
	Name                   string // trade number, upper case; "ideal" for the perfect timer
	Document               string // the data sheet that the figures are from
	CMOS                   bool
	SupplyMinV, SupplyMaxV float64 // 0, 0: no limits (ideal)
}

// Ideal is a timer with no imperfection: exact thirds, no currents, no drops,
// no delay, no limits.
var Ideal = Device{Name: "ideal"}

// Conditions is a device in use: the levels that the equations compute with.
type Conditions struct {
	Device                *Device
	SupplyV               float64
	AmbientC              float64
	HighLevelV, LowLevelV float64 // comparator levels Vhi, Vlo
	SwitchV, SwitchOhm    float64 // discharge switch when on: Vsat behind Ron
	OutHighV, OutHighOhm  float64 // output high: open-circuit level behind a resistance
	OutLowV, OutLowOhm    float64 // output low, likewise
}

// Under returns the device's conditions at a supply, an ambient temperature and
// an output load. The error says which limit of the device is broken.
func (d *Device) Under(supplyV, ambientC, loadA, controlV float64) (Conditions, error) {
	return Conditions{
		Device: d, SupplyV: supplyV, AmbientC: ambientC,
		HighLevelV: supplyV * 2 / 3, LowLevelV: supplyV / 3,
		OutHighV: supplyV,
	}, nil
}
