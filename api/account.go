package api

// account says what came of the calculations of a request.
type account struct {
	good    int
	bad     map[string]int // by outcome
	states  int            // shown
	outside int            // of the good ones, those outside the validity of the equation

	reservations []reservation // about transport properties, in the order of the states
}

// count enters one calculation, which p stands for when it failed.
func (a *account) count(p *Problem, outside bool) {
	if p == nil {
		a.good++
		if outside {
			a.outside++
		}
		return
	}
	if a.bad == nil {
		a.bad = map[string]int{}
	}
	a.bad[p.outcome()]++
}

// add enters all that b has.
func (a *account) add(b *account) {
	a.good += b.good
	a.states += b.states
	a.outside += b.outside
	for _, r := range b.reservations {
		a.reserve(r.Caution, r.states)
	}
	for outcome, n := range b.bad {
		if a.bad == nil {
			a.bad = map[string]int{}
		}
		a.bad[outcome] += n
	}
}

func (a *account) failed() int {
	n := 0
	for _, count := range a.bad {
		n += count
	}
	return n
}
