package main

import (
	"context"
	"encoding/json"
	"fmt"
	"net/http"
	"os"
	"strconv"
)

// connections keeps one core of the service busy without a long queue.
const connections = 8

// cost compares the processor time of requests with that of bare routes. The rounds of both alternate, so that what else
// the machine does meets both.
func cost(ctx context.Context, s *settings) (*report, error) {
	r := newReport("request", "dewmark, µs", "bare route, µs", "ratio, median of rounds", "goal", "", "requests per core and second")
	p, err := s.start(ctx, launch{})
	if err != nil {
		return r, err
	}
	defer p.end(r)
	if err := p.quiet(ctx); err != nil {
		return r, err
	}
	questions := []struct {
		question
		goal float64
	}{{oneState, 1.25}, {oneCycle, 1.6}}
	var exchanges []exchange
	for _, q := range questions {
		answer, err := ask(ctx, http.DefaultClient, p.address, &q.question)
		if err != nil {
			return r, err
		}
		exchanges = append(exchanges, exchange{q.path, json.RawMessage(q.body), answer})
	}
	bare, err := s.startBare(ctx, exchanges)
	if err != nil {
		return r, err
	}
	defer bare.kill()
	for _, q := range questions {
		var ours, bares, ratios, throughput []float64
		for round := range s.rounds + 1 {
			mine, err := s.measure(ctx, p, &q.question, connections)
			if err != nil {
				return r, err
			}
			theirs, err := s.measure(ctx, bare, &q.question, connections)
			if err != nil {
				return r, err
			}
			if mine.Errors+theirs.Errors > 0 {
				r.fail("%s: %d failed requests, %d of the bare route", q.name, mine.Errors, theirs.Errors)
			}
			s.note("%s: %.1f µs, bare %.1f µs", q.name, micro(mine.cpu), micro(theirs.cpu))
			if round == 0 {
				continue // warms up both
			}
			ours, bares = append(ours, micro(mine.cpu)), append(bares, micro(theirs.cpu))
			ratios = append(ratios, float64(mine.cpu)/float64(theirs.cpu))
			throughput = append(throughput, 1/mine.cpu.Seconds())
		}
		middle := quantile(ratios, 0.5)
		r.row(q.name, spread(ours, "%.1f"), spread(bares, "%.1f"), spread(ratios, "%.2f"), fmt.Sprintf("%.2f", q.goal), goal(middle, q.goal), fmt.Sprintf("%.0f", quantile(throughput, 0.5)))
	}
	return r, nil
}

// startBare starts this program as the bare service.
func (s *settings) startBare(ctx context.Context, exchanges []exchange) (*service, error) {
	file, err := os.CreateTemp("", "dewmark-loadtest-*.json")
	if err != nil {
		return nil, err
	}
	defer os.Remove(file.Name())
	if err := json.NewEncoder(file).Encode(exchanges); err != nil {
		return nil, err
	}
	if err := file.Close(); err != nil {
		return nil, err
	}
	self, err := os.Executable()
	if err != nil {
		return nil, err
	}
	return s.launch(ctx, []string{self, "bare", "--exchanges", file.Name()}, launch{})
}

// sizing measures typical requests, for the page on scaling.
func sizing(ctx context.Context, s *settings) (*report, error) {
	r := newReport("request", "processor time", "requests per core and second", "p50 of one client", "p99 of one client", "bytes of the answer")
	p, err := s.start(ctx, launch{})
	if err != nil {
		return r, err
	}
	defer p.end(r)
	if err := p.quiet(ctx); err != nil {
		return r, err
	}
	for _, q := range []question{oneState, blendState, batch(100), batch(1000), oneCycle, blendCycle, bestCycle, table, rating} {
		answer, err := ask(ctx, http.DefaultClient, p.address, &q)
		if err != nil {
			return r, err
		}
		var cpu []float64
		for range s.rounds {
			m, err := s.measure(ctx, p, &q, connections)
			if err != nil {
				return r, err
			}
			if m.Errors > 0 {
				r.fail("%s: %d failed requests", q.name, m.Errors)
			}
			cpu = append(cpu, micro(m.cpu))
		}
		alone, err := s.measure(ctx, p, &q, 1)
		if err != nil {
			return r, err
		}
		r.row(q.name, spread(cpu, "%.0f")+" µs", fmt.Sprintf("%.0f", 1e6/quantile(cpu, 0.5)),
			fmt.Sprintf("%.2f ms", 1e3*alone.P50), fmt.Sprintf("%.2f ms", 1e3*alone.P99), strconv.Itoa(len(answer)))
	}
	return r, nil
}
