package props

// withDatum returns the view of f that counts from d. It is made once and shared.
func (f *fluid) withDatum(d Datum) (*Pure, error) {
	if int(d) >= len(f.views) {
		return f.makeView(d)
	}
	if v := f.views[d].Load(); v != nil {
		return v, nil
	}
	v, err := f.makeView(d)
	if err == nil {
		f.views[d].Store(v)
	}
	return v, err
}

// makeView makes what withDatum shares. It returns a [*DatumError] where f has no such datum.
func (f *fluid) makeView(d Datum) (*Pure, error) {
	r := f.view()
	if d == DefaultDatum {
		d = IIR
		if _, ok := r.reference(IIR); !ok {
			d = TriplePoint
		}
	}
	ref, ok := r.reference(d)
	if !ok {
		return nil, &DatumError{Refrigerant: f.rec.ID, Datum: d, Allowed: r.Datums()}
	}
	r.datum = d
	switch d {
	case IIR:
		r.h0, r.s0 = 200e3-ref.H, 1e3-ref.S
	case TriplePoint:
		r.h0, r.s0 = -ref.U, -ref.S
	default:
		r.h0, r.s0 = -ref.H, -ref.S
	}
	return r, nil
}

// reference returns the saturated liquid that d counts from, as r counts, and reports whether it exists.
func (r *Pure) reference(d Datum) (State, bool) {
	var s State
	var err error
	switch d {
	case IIR:
		s, err = r.BubblePoint(273.15)
	case ASHRAE:
		s, err = r.BubblePoint(233.15)
	case NBP:
		s, err = r.BubblePointAtPressure(StandardAtmosphere)
	case TriplePoint:
		t := r.rec.TripleTemperature
		if t == nil || *t != r.curve.TMin {
			return State{}, false // the equation does not reach the triple point
		}
		s, err = r.BubblePoint(*t)
	default:
		return State{}, false
	}
	return s, err == nil
}

// Datums returns the datums that the refrigerant can have.
func (r *Pure) Datums() []Datum {
	var out []Datum
	for _, d := range []Datum{IIR, ASHRAE, NBP, TriplePoint} {
		if _, ok := r.reference(d); ok {
			out = append(out, d)
		}
	}
	return out
}
