package timer

import "strings"

// The documents behind the figures of this file.
const (
	documentNE555  = "TI SLFS022; discharge pin and frequency: ST data sheet NE555"
	documentTLC555 = "TI SLFS043C"
)

// devices is every timer family the program has figures for, after the ideal
// one. Points are sorted by supply, then current.
var devices = []*Device{
	&Ideal,
	{
		Name: "NE555", Document: documentNE555,
		SupplyMinV: 4.5, SupplyMaxV: 16, // SLFS022
		// SLFS022: high-level output 2.75/3.3 V min/typ at 5 V and 100 mA,
		// 12.75/13.3 V at 15 V and 100 mA, 12.5 V typ at 200 mA.
		OutHigh: []Drop{
			{5, 100e-3, Stated{1.7, 2.25}},
			{15, 100e-3, Stated{1.7, 2.25}},
			{15, 200e-3, Stated{Typ: 2.5}},
		},
		// SLFS022: low-level output.
		OutLow: []Drop{
			{5, 5e-3, Stated{.1, .35}},
			{5, 8e-3, Stated{.15, .4}},
			{15, 10e-3, Stated{.1, .25}},
			{15, 50e-3, Stated{.4, .75}},
			{15, 100e-3, Stated{2, 2.5}},
		},
		// ST: discharge pin saturation voltage 80/200 mV at 4.5 mA and 5 V,
		// 180/480 mV at 15 mA and 15 V.
		Switch: []Drop{
			{5, 4.5e-3, Stated{80e-3, 200e-3}},
			{15, 15e-3, Stated{180e-3, 480e-3}},
		},
		SourceMaxA: 200e-3, SinkMaxA: 200e-3, // SLFS022: recommended
		// ST limits the discharge pin by the package's dissipation alone; the
		// output's recommended current stands in for a figure.
		SwitchMaxA:     200e-3,
		FrequencyMaxHz: 500e3,                                                                   // ST: above 500 kHz
		ThresholdA:     Stated{30e-9, 250e-9},                                                   // SLFS022
		TriggerA:       Stated{.5e-6, 2e-6},                                                     // SLFS022, pin at 0 V
		SwitchOffA:     Stated{20e-9, 100e-9},                                                   // SLFS022
		Astable:        TimingError{Stated{Typ: .0225}, Stated{Typ: 150e-6}, Stated{Typ: .003}}, // SLFS022
		OneShot:        TimingError{Stated{.01, .03}, Stated{Typ: 50e-6}, Stated{.001, .005}},   // SLFS022
		Levels: []Levels{ // SLFS022
			{5, 2.4, 4.2, 1.1, 2.2},
			{15, 8.8, 11.2, 4.5, 5.6},
		},
	},
	{
		Name: "TLC555", Document: documentTLC555, CMOS: true,
		SupplyMinV: 2, SupplyMaxV: 15, // SLFS043C
		// SLFS043C: high-level output 4.1/4.8 V min/typ at 5 V and 1 mA,
		// 12.5/14.2 V at 15 V and 10 mA.
		OutHigh: []Drop{
			{5, 1e-3, Stated{.2, .9}},
			{15, 10e-3, Stated{.8, 2.5}},
		},
		// SLFS043C: low-level output.
		OutLow: []Drop{
			{5, 8e-3, Stated{.21, .4}},
			{15, 10e-3, Stated{.12, .3}},
			{15, 100e-3, Stated{1.28, 3.2}},
		},
		// SLFS043C: discharge switch on-state voltage.
		Switch: []Drop{
			{5, 10e-3, Stated{.14, .5}},
			{15, 100e-3, Stated{.77, 1.7}},
		},
		SourceMaxA: 10e-3, SinkMaxA: 100e-3, // SLFS043C
		SwitchMaxA:     100e-3,                                                              // SLFS043C: the largest current at which the drop is stated
		FrequencyMaxHz: 1.2e6,                                                               // SLFS043C: the least of the maximum frequency
		ThresholdA:     Stated{Typ: 10e-12},                                                 // SLFS043C
		TriggerA:       Stated{Typ: 10e-12},                                                 // SLFS043C
		SwitchOffA:     Stated{Typ: .1e-9},                                                  // SLFS043C
		Astable:        TimingError{Initial: Stated{.01, .03}, PerVolt: Stated{.001, .005}}, // SLFS043C
		OneShot:        TimingError{Initial: Stated{.01, .03}, PerVolt: Stated{.001, .005}}, // SLFS043C
	},
}

// Devices returns every timer family, the ideal timer first. The slice is the
// caller's; the devices are not to be changed.
func Devices() []*Device { return append([]*Device(nil), devices...) }

// DeviceByName returns the family with the name as people write it ("ideal",
// "tlc555"), or nil.
func DeviceByName(name string) *Device {
	for _, device := range devices {
		if strings.EqualFold(device.Name, strings.TrimSpace(name)) {
			return device
		}
	}
	return nil
}

// DeviceForPart returns the family that a part's trade number belongs to: the
// family's number, alone or with a package or grade in letters after it
// ("NE555P", "TLC555CP", "ne555-dr"), spaces and hyphens apart. A number that
// another maker gives the same circuit has no figures here and belongs to none.
func DeviceForPart(partNumber string) (*Device, bool) {
	number := tradeNumber(partNumber)
	for _, device := range devices[1:] {
		if belongsTo(number, device.Name) {
			return device, true
		}
	}
	return nil, false
}
