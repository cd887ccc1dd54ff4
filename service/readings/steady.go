package readings

import (
	"math"
	"time"
)

// Defaults of the criterion of steadiness (common practice; EN 14511 allows means to deviate by 0.2 to 0.3 K in a
// laboratory).
const (
	defaultWindow    = 10 * time.Minute
	defaultDeviation = 0.5      // K
	defaultSlope     = 0.1 / 60 // K/s
)

// watched are the temperatures that must be steady: saturation temperatures and what is read on pipes and streams.
var watched = func() (all []watchedTemperature) {
	all = append(all, watchedTemperature{figure: FigureEvaporationTemperature}, watchedTemperature{figure: FigureCondensationTemperature})
	for r := firstReading; r < readingCount; r++ {
		if k := readingTable[r].kind; k == pipeTemperature || k == streamTemperature {
			all = append(all, watchedTemperature{reading: r})
		}
	}
	return all
}()

// watchedTemperature is a reading, or where that is 0 a figure.
type watchedTemperature struct {
	reading Reading
	figure  Figure
}

func (x watchedTemperature) String() string {
	if x.reading != 0 {
		return x.reading.String()
	}
	return x.figure.String()
}

const mostWatched = 16

// moment holds the watched temperatures at one time, K; NaN where not known.
type moment struct {
	at      time.Time
	seconds float64 // since the window began
	T       [mostWatched]float64
}

func momentOf(s *Sample, r *Result) (m moment, tells bool) {
	m.at = s.Time
	for i, x := range watched {
		m.T[i] = math.NaN()
		switch {
		case x.reading == 0:
			m.T[i] = r.Figure(x.figure).Value
		case s.has(x.reading):
			m.T[i] = s.values[x.reading]
		}
		tells = tells || !math.IsNaN(m.T[i])
	}
	return m, tells
}

// Bounds of what a window remembers.
const (
	leastMoments   = 3  // to judge by
	mostMoments    = 60 // closer ones add nothing
	interruptedFor = 3  // windows without a sample after which the machine must show again that it is steady
)

// window remembers the last temperatures. Its memory does not grow with the rate of samples.
type window struct {
	span             time.Duration
	deviation, slope float64
	moments          []moment
	last             time.Time // of any sample, remembered or not
	begun            time.Time
}

// forget begins anew.
func (w *window) forget() { w.moments = w.moments[:0] }

// judge takes a moment in and tells whether the machine has been steady for the window, or why not and which temperature is
// to blame.
func (w *window) judge(m *moment) (Rejection, string) {
	if !w.last.IsZero() && m.at.Sub(w.last) > interruptedFor*w.span {
		w.forget()
	}
	if w.begun.IsZero() {
		w.begun = m.at
	}
	w.last, m.seconds = m.at, m.at.Sub(w.begun).Seconds()
	w.remember(m)
	first := w.moments[0]
	if len(w.moments) < leastMoments || m.at.Sub(first.at) < w.span {
		return Starting, ""
	}
	for i, x := range watched {
		if verdict := w.judgeOne(i, m); verdict != Accepted {
			return verdict, x.String()
		}
	}
	return Accepted, ""
}

// remember appends a moment, unless it comes right after the one before, and drops those that the window has passed.
func (w *window) remember(m *moment) {
	n := len(w.moments)
	if n > 0 && m.at.Sub(w.moments[n-1].at) < w.span/mostMoments {
		return
	}
	drop := 0
	for n-drop > leastMoments-1 && m.at.Sub(w.moments[drop+1].at) >= w.span {
		drop++
	}
	w.moments = append(w.moments[:0], w.moments[drop:]...)
	w.moments = append(w.moments, *m)
}

// judgeOne looks at one temperature over the window, the newest value included.
func (w *window) judgeOne(i int, newest *moment) Rejection {
	from := w.moments[0].seconds
	var n, sumX, sumY, sumXX, sumXY float64 // times in s after the first, temperatures in K above the newest
	low, high := math.Inf(1), math.Inf(-1)
	add := func(m *moment) {
		T := m.T[i]
		if math.IsNaN(T) {
			return
		}
		low, high = min(low, T), max(high, T)
		x, y := m.seconds-from, T-newest.T[i]
		n++
		sumX += x
		sumY += y
		sumXX += x * x
		sumXY += x * y
	}
	if math.IsNaN(newest.T[i]) {
		return Accepted
	}
	for j := range w.moments {
		add(&w.moments[j])
	}
	if newest.seconds > w.moments[len(w.moments)-1].seconds {
		add(newest)
	}
	if n < leastMoments { // a sensor that comes and goes is not what makes a machine unsteady
		return Accepted
	}
	if slope := (n*sumXY - sumX*sumY) / (n*sumXX - sumX*sumX); !(math.Abs(slope) < w.slope) {
		return Drifting
	}
	if mean := newest.T[i] + sumY/n; high-mean > w.deviation || mean-low > w.deviation {
		return Unsteady
	}
	return Accepted
}
