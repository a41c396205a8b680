package timer

// circuits is every wiring the program knows, in the order of listings.
var circuits = []*Circuit{
	&classic, &classicInverted, &diodeBypass, &dischargeLimb,
	&outputFed, &outputFedSplit, &oneShot, &powerOnPulse,
}

// Circuits returns every circuit in the order of listings. The slice is the
// caller's; the circuits are not to be changed.
func Circuits() []*Circuit { return append([]*Circuit(nil), circuits...) }

// CircuitBySlug returns the circuit with the slug, or nil.
func CircuitBySlug(slug string) *Circuit {
	for _, circuit := range circuits {
		if circuit.Slug == slug {
			return circuit
		}
	}
	return nil
}
