package blend

import "dewmark/props/data"

// Classification returns safety and environmental data of the blend. What the data file of a listed blend leaves open and
// follows from the components, the global warming and ozone depletion potentials, is their mass-weighted sum; the safety
// class of a free composition is not known.
func (m *mixture) Classification() data.Classification {
	var c data.Classification
	if m.listed != nil {
		c = m.listed.Classification
	} else {
		c.Provenance.GWP = "C from components"
	}
	fill := func(target **float64, of func(*data.Classification) *float64) {
		if *target == nil {
			*target = m.weighted(of)
		}
	}
	fill(&c.ODP, func(k *data.Classification) *float64 { return k.ODP })
	fill(&c.GWP100.AR4, func(k *data.Classification) *float64 { return k.GWP100.AR4 })
	fill(&c.GWP100.AR5, func(k *data.Classification) *float64 { return k.GWP100.AR5 })
	fill(&c.GWP100.AR6, func(k *data.Classification) *float64 { return k.GWP100.AR6 })
	return c
}

// weighted returns the mass-weighted sum of a number of the components, or nil when one of them is not known.
func (m *mixture) weighted(of func(*data.Classification) *float64) *float64 {
	var sum float64
	for i, r := range m.model.records {
		v := of(&r.Classification)
		if v == nil {
			return nil
		}
		sum += m.w[i] * *v
	}
	return &sum
}
