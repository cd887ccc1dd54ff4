package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"os"
	"time"
)

// footprint measures how large the service is and how fast it starts.
func footprint(ctx context.Context, s *settings) (*report, error) {
	r := newReport("what", "measured", "goal", "")
	file, err := os.Stat(s.binary)
	if err != nil {
		return r, err
	}
	size := float64(file.Size()) / 1e6
	r.row("binary", fmt.Sprintf("%.1f MB", size), "25 MB", goal(size, 25))

	var first, ready []float64
	for range s.rounds {
		p, err := s.start(ctx, launch{})
		if err != nil {
			return r, err
		}
		if err := p.await(ctx, "/v1/states?refrigerant=R290&temperature=5&pressure=400", 10*time.Second); err != nil {
			return r, errors.Join(err, p.stop(time.Second))
		}
		first = append(first, 1e3*time.Since(p.began).Seconds())
		if err := p.await(ctx, "/readyz", 10*time.Second); err != nil {
			return r, errors.Join(err, p.stop(time.Second))
		}
		ready = append(ready, 1e3*time.Since(p.began).Seconds())
		p.end(r)
	}
	r.row("from exec to the first state", spread(first, "%.0f")+" ms", "100 ms", goal(quantile(first, 0.5), 100))
	r.row("from exec to ready", spread(ready, "%.0f")+" ms", "1000 ms", goal(quantile(ready, 0.5), 1000))

	p, err := s.start(ctx, launch{})
	if err != nil {
		return r, err
	}
	defer p.end(r)
	if err := p.quiet(ctx); err != nil {
		return r, err
	}
	if err := p.warm(ctx); err != nil {
		return r, err
	}
	select {
	case <-time.After(10 * time.Second):
	case <-ctx.Done():
		return r, ctx.Err()
	}
	rss, err := memory(p.pid(), "VmRSS")
	if err != nil {
		return r, err
	}
	anonymous, err := memory(p.pid(), "RssAnon")
	r.row("resident memory 10 s after every refrigerant was used", fmt.Sprintf("%.1f MB, of which %.1f MB are not the binary", rss, anonymous), "40 MB", goal(rss, 40))
	return r, err
}

// warm asks for a saturated state of every refrigerant and a cycle.
func (p *service) warm(ctx context.Context) error {
	r, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+p.address+"/v1/refrigerants", http.NoBody)
	if err != nil {
		return err
	}
	answer, err := http.DefaultClient.Do(r)
	if err != nil {
		return err
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil {
		return err
	}
	var list struct {
		Refrigerants []struct {
			Designation         string
			CriticalTemperature float64 `json:"critical_temperature"`
			TemperatureMin      float64 `json:"temperature_min"`
		}
	}
	if err := json.Unmarshal(text, &list); err != nil {
		return err
	}
	if len(list.Refrigerants) == 0 {
		return errors.New("there are no refrigerants")
	}
	for _, f := range list.Refrigerants {
		middle := (f.CriticalTemperature + f.TemperatureMin) / 2
		q := question{f.Designation, "/v1/states", fmt.Sprintf(`{"refrigerant": %q, "points": [{"temperature": %g, "quality": 0.5}]}`, f.Designation, middle)}
		if _, err := ask(ctx, http.DefaultClient, p.address, &q); err != nil {
			return err
		}
	}
	for range 200 {
		if _, err := ask(ctx, http.DefaultClient, p.address, &oneCycle); err != nil {
			return err
		}
	}
	return nil
}
