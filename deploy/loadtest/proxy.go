package main

import (
	"context"
	"net/http"
	"net/http/httputil"
	"sync"
	"sync/atomic"
	"time"
)

// proxy spreads requests over replicas in turn. Like that of a cluster it knows two things of each: whether it was taken
// out by whoever restarts it, and whether its readiness probe answers. It tries no request twice.
type proxy struct {
	mu       sync.RWMutex
	replicas []*replica
	next     atomic.Uint64
	forward  httputil.ReverseProxy
}

type replica struct {
	*service
	ready, withdrawn atomic.Bool
}

const probeInterval = 50 * time.Millisecond

type chosenReplica struct{}

func newProxy() *proxy {
	return &proxy{forward: httputil.ReverseProxy{
		Rewrite: func(r *httputil.ProxyRequest) {
			r.Out.URL.Scheme, r.Out.URL.Host = "http", r.In.Context().Value(chosenReplica{}).(string)
		},
		Transport: &http.Transport{MaxIdleConnsPerHost: 64},
		ErrorHandler: func(w http.ResponseWriter, _ *http.Request, err error) {
			http.Error(w, cause(err), http.StatusBadGateway)
		},
	}}
}

func (p *proxy) ServeHTTP(w http.ResponseWriter, r *http.Request) {
	address := p.choose()
	if address == "" {
		http.Error(w, "no replica is ready", http.StatusBadGateway)
		return
	}
	p.forward.ServeHTTP(w, r.WithContext(context.WithValue(r.Context(), chosenReplica{}, address)))
}

// choose returns the address of the next replica that takes requests.
func (p *proxy) choose() string {
	p.mu.RLock()
	defer p.mu.RUnlock()
	for range p.replicas {
		if c := p.replicas[p.next.Add(1)%uint64(len(p.replicas))]; c.ready.Load() && !c.withdrawn.Load() {
			return c.address
		}
	}
	return ""
}

// put makes a service the replica of a number.
func (p *proxy) put(i int, s *service) {
	c := &replica{service: s}
	c.ready.Store(true) // the caller has waited for it
	p.mu.Lock()
	defer p.mu.Unlock()
	if i == len(p.replicas) {
		p.replicas = append(p.replicas, c)
		return
	}
	p.replicas[i] = c
}

// replica returns the replica of a number.
func (p *proxy) replica(i int) *replica {
	p.mu.RLock()
	defer p.mu.RUnlock()
	return p.replicas[i]
}

// probe keeps asking the replicas whether they are ready.
func (p *proxy) probe(ctx context.Context) {
	client := &http.Client{Timeout: time.Second, Transport: &http.Transport{DisableKeepAlives: true}}
	for tick := time.NewTicker(probeInterval); ctx.Err() == nil; <-tick.C {
		p.mu.RLock()
		replicas := append([]*replica(nil), p.replicas...)
		p.mu.RUnlock()
		for _, c := range replicas {
			r, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+c.address+"/readyz", http.NoBody)
			if err != nil {
				continue
			}
			answer, err := client.Do(r)
			if err == nil {
				_ = answer.Body.Close()
			}
			c.ready.Store(err == nil && answer.StatusCode == http.StatusOK)
		}
	}
}
