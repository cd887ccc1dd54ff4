package main

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"net/http"
	"sync"
	"sync/atomic"
	"time"
)

const (
	streamed = 100_000 // points of a stream
	streams  = 4       // at once
)

// fairness measures single states, asked at a steady low rate, first alone and then beside long streams.
func fairness(ctx context.Context, s *settings) (*report, error) {
	r := newReport("single states, 200 a second", "p50", "p99", "slowest", "not answered with 200")
	p, err := s.start(ctx, launch{})
	if err != nil {
		return r, err
	}
	defer p.end(r)
	if err := p.quiet(ctx); err != nil {
		return r, err
	}
	row := func(what string, f *flooded) {
		other := f.sent - f.statuses[http.StatusOK]
		r.row(what, fmt.Sprintf("%.2f ms", 1e3*quantile(f.accepted, 0.5).Seconds()), fmt.Sprintf("%.2f ms", 1e3*quantile(f.accepted, 0.99).Seconds()),
			fmt.Sprintf("%.2f ms", 1e3*quantile(f.accepted, 1).Seconds()), fmt.Sprintf("%d of %d", other, f.sent))
		if other > 0 {
			r.fail("%s: %d of %d single states were not answered: %v %v", what, other, f.sent, f.statuses, f.broken)
		}
	}
	alone, err := flood(ctx, p.address, &oneState, 200, s.time)
	if err != nil {
		return r, err
	}
	row("alone", alone)

	streaming, stop := context.WithCancel(ctx)
	defer stop()
	var points atomic.Int64
	var all sync.WaitGroup
	for range streams {
		all.Go(func() {
			for streaming.Err() == nil {
				if err := stream(streaming, p.address, &points); err != nil && streaming.Err() == nil {
					r.fail("a stream broke: %v", err)
					return
				}
			}
		})
	}
	begun := time.Now()
	f, err := flood(ctx, p.address, &oneState, 200, s.time)
	rate := float64(points.Load()) / time.Since(begun).Seconds()
	stop()
	all.Wait()
	if err != nil {
		return r, err
	}
	row(fmt.Sprintf("beside %d streams of %d points, which had %.0f points a second together", streams, streamed, rate), f)
	return r, nil
}

// stream asks for one long stream and reads it, counting the answers.
func stream(ctx context.Context, address string, points *atomic.Int64) error {
	line := []byte(`{"temperature": 25, "pressure": 200}` + "\n")
	block := bytes.Repeat(line, 1000)
	body, sink := io.Pipe()
	go func() {
		_, err := io.WriteString(sink, `{"refrigerant": "R134a"}`+"\n")
		for n := 0; n < streamed && err == nil; n += 1000 {
			_, err = sink.Write(block)
		}
		_ = sink.CloseWithError(err)
	}()
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, "http://"+address+"/v1/states", body)
	if err != nil {
		return err
	}
	r.Header.Set("Content-Type", "application/x-ndjson")
	answer, err := http.DefaultClient.Do(r)
	if err != nil {
		return err
	}
	defer answer.Body.Close()
	if answer.StatusCode != http.StatusOK {
		return fmt.Errorf("a stream was answered %s", answer.Status)
	}
	buffer, had := make([]byte, 256<<10), 0
	for {
		n, err := answer.Body.Read(buffer)
		lines := bytes.Count(buffer[:n], []byte{'\n'})
		had += lines
		points.Add(int64(lines))
		if err == io.EOF {
			if had != streamed {
				return fmt.Errorf("a stream of %d points ended after %d", streamed, had)
			}
			return nil
		}
		if err != nil {
			return err
		}
	}
}
