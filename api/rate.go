package api

import (
	"math"
	"net/http"
	"net/netip"
	"strconv"
	"sync"
	"time"

	"github.com/gin-gonic/gin"
	"golang.org/x/time/rate"
)

// maxClients is how many clients have a bucket of their own in memory. Beyond it those that were not heard of for longest
// begin anew with a full one.
const maxClients = 10_000

// rates gives each client a bucket of tokens, from which each request takes one.
type rates struct {
	limit rate.Limit // requests a second
	burst int

	mu          sync.Mutex
	young, aged map[string]*rate.Limiter // half of maxClients each: when the young are as many, they become the aged
}

// newRates returns nil, which limits nobody, without a limit.
func newRates(perSecond float64, burst int) *rates {
	if perSecond == 0 {
		return nil
	}
	if burst == 0 {
		burst = int(math.Ceil(perSecond))
	}
	return &rates{limit: rate.Limit(perSecond), burst: burst, young: map[string]*rate.Limiter{}}
}

// take returns how long a client has to wait, 0 if it may go on.
func (r *rates) take(client string, now time.Time) time.Duration {
	reservation := r.bucket(client).ReserveN(now, 1)
	wait := reservation.DelayFrom(now)
	if wait > 0 {
		reservation.CancelAt(now)
	}
	return wait
}

func (r *rates) bucket(client string) *rate.Limiter {
	r.mu.Lock()
	defer r.mu.Unlock()
	if b, ok := r.young[client]; ok {
		return b
	}
	if len(r.young) >= maxClients/2 {
		r.young, r.aged = map[string]*rate.Limiter{}, r.young
	}
	b, ok := r.aged[client]
	if !ok {
		b = rate.NewLimiter(r.limit, r.burst)
	}
	r.young[client] = b
	return b
}

// throttle turns requests of clients away that ask too often.
func (a *API) throttle(c *gin.Context) {
	if a.rates == nil || !guarded(c.Request.URL.Path) {
		c.Next()
		return
	}
	wait := a.rates.take(clientOf(c), a.now())
	if wait <= 0 {
		c.Next()
		return
	}
	c.Header("Retry-After", strconv.Itoa(int(math.Ceil(wait.Seconds()))))
	c.Abort()
	detail := "this client may send " + strconv.FormatFloat(float64(a.rates.limit), 'g', -1, 64) + " requests a second; batches hold many items in one"
	a.fail(c, a.turnAway(refusedRate, refusal(http.StatusTooManyRequests, "rate-limit", detail)))
}

// clientOf names the client of a request: by its token, or else by its address. Of IPv6 it is the network, since a client
// has as many addresses in it as it likes.
func clientOf(c *gin.Context) string {
	if name := c.GetString(clientKey); name != "" {
		return name
	}
	ip, err := netip.ParseAddr(c.ClientIP())
	if err != nil {
		return "" // all that have none, such as those on a pipe, share a bucket
	}
	if ip = ip.Unmap().WithZone(""); ip.Is6() {
		network, _ := ip.Prefix(64)
		return network.String()
	}
	return ip.String()
}
