package blend

// WithDatum returns the view of the blend that counts from d. It makes the phase envelope, and returns an [*EnvelopeError]
// when there is none or a [*DatumError] when the blend is no saturated liquid at the reference point.
func (m *mixture) WithDatum(d Datum) (*Blend, error) {
	dome, err := m.dome()
	if err != nil {
		return nil, err
	}
	b := &Blend{mixture: m, d: dome, limits: m.molarLimits(dome)}
	if d == DefaultDatum {
		d = IIR
		if _, ok := b.reference(IIR); !ok {
			d = NBP
		}
	}
	ref, ok := b.reference(d)
	if !ok {
		return nil, &DatumError{Refrigerant: m.designation, Datum: d, Allowed: b.Datums()}
	}
	b.datum = d
	if d == IIR {
		b.h0, b.s0 = 200e3-ref.H, 1e3-ref.S
	} else {
		b.h0, b.s0 = -ref.H, -ref.S
	}
	return b, nil
}

// reference returns the saturated liquid that d counts from, counted from the zero points of the model, and reports
// whether it exists.
func (b *Blend) reference(d Datum) (State, bool) {
	plain := *b
	plain.h0, plain.s0 = 0, 0
	var st State
	var err error
	switch d {
	case IIR:
		st, err = plain.BubblePoint(273.15)
	case ASHRAE:
		st, err = plain.BubblePoint(233.15)
	case NBP:
		st, err = plain.BubblePointAtPressure(StandardAtmosphere)
	default:
		return State{}, false
	}
	return st, err == nil
}

// Datums returns the datums that the blend can have.
func (b *Blend) Datums() []Datum {
	var out []Datum
	for _, d := range []Datum{IIR, ASHRAE, NBP} {
		if _, ok := b.reference(d); ok {
			out = append(out, d)
		}
	}
	return out
}
