package blend

// side tells the two halves of the envelope apart. Seen over temperature they meet where temperature is highest, seen
// over pressure where pressure is highest; below that they are the bubble and the dew line.
type side int

const (
	dense side = iota
	light
)

// dome is everything known about the phase envelope of a blend.
type dome struct {
	*envelope
	lines [2]*line
	min   [2]edgePoint // the cold ends
}

// newDome traces the envelope and expands its lines.
func (s *solver) newDome(Tmin float64) (*dome, error) {
	e, err := s.newEnvelope(Tmin)
	if err != nil {
		return nil, err
	}
	d := &dome{envelope: e}
	s.d = d
	places := manyPlaces
	if s.m.listed != nil {
		places = 1 // the cold end; a test looks at the rest
	}
	if Tmin, err = s.stableFrom(Tmin, places); err != nil {
		return nil, err
	}
	ends := [2]float64{
		min(-lineSpread, e.topT.S-lineClearance, e.topP.S-lineClearance),
		max(lineSpread, e.topT.S+lineClearance, e.topP.S+lineClearance),
	}
	for sd, S := range ends {
		u := make([]float64, len(s.m.z)+3)
		e.interpolate(S, u)
		end, ok := s.solveNode(edge(u[:len(u)-1]), S)
		top := end.point()
		if !ok || top.T <= Tmin {
			return nil, &EnvelopeError{Refrigerant: s.m.designation, T: top.T, Reason: "too small to be expanded"}
		}
		l, expanded := newLine(len(s.m.z), Tmin, top.T, func(T float64) ([]float64, bool) {
			a, ok := s.saturatedAtT(T, side(sd))
			if !ok {
				return nil, false
			}
			return a.fields(), true
		})
		first, ok := s.saturatedAtT(Tmin, side(sd))
		if !expanded || !ok {
			return nil, &EnvelopeError{Refrigerant: s.m.designation, T: top.T, Reason: "it cannot be expanded"}
		}
		l.lo, l.hi = edgePoint{first.S, first.T, first.p, first.bulk.rho}, top
		d.min[sd] = l.lo
		d.lines[sd] = l
	}
	return d, nil
}
