package api

import (
	"cmp"
	"errors"
	"fmt"
	"log/slog"
	"net/http"
	"runtime/debug"
	"slices"
	"strconv"

	"github.com/gin-gonic/gin"
)

// observe counts, times, traces and logs every request. It is the outermost middleware, so that it sees the status of a
// recovered panic.
func (a *API) observe(c *gin.Context) {
	start := a.now()
	a.metrics.inFlight.Inc()
	where := a.trace(c)
	defer func() {
		a.metrics.inFlight.Dec()
		seconds, status := a.now().Sub(start).Seconds(), c.Writer.Status()
		route, method := routeOf(c), methodLabel(c.Request.Method)
		a.metrics.request(route, method, strconv.Itoa(status), seconds, where.ids)
		causes := causesOf(c)
		where.end(status, causes)
		level := levelFor(route, status)
		if !a.log.Enabled(c.Request.Context(), level) {
			return
		}
		attributes := append(make([]slog.Attr, 0, 9), slog.String("method", method), slog.String("route", route), slog.Int("status", status),
			slog.Float64("duration_s", seconds), slog.Int("bytes", max(c.Writer.Size(), 0)), slog.String("request_id", where.id))
		if where.ids.HasTraceID() {
			attributes = append(attributes, slog.String("trace_id", where.ids.TraceID().String()))
		}
		if client := c.GetString(clientKey); client != "" {
			attributes = append(attributes, slog.String("client", client))
		}
		if len(causes) > 0 {
			attributes = append(attributes, slog.Any("err", causes))
		}
		a.log.LogAttrs(c.Request.Context(), level, "request", attributes...)
	}()
	c.Next()
}

// routeOf names the resource of a request, never by its raw path, of which there is no end.
func routeOf(c *gin.Context) string { return cmp.Or(c.FullPath(), "unmatched") }

// causesOf tells why a request failed. A problem is told by its type alone: its detail repeats parts of the request, which
// have no business in a log.
func causesOf(c *gin.Context) []string {
	var causes []string
	for _, e := range c.Errors {
		if p, ok := errors.AsType[*Problem](e.Err); ok {
			causes = append(causes, p.outcome())
		} else {
			causes = append(causes, e.Error())
		}
	}
	return causes
}

// levelFor keeps probes, good answers and what overload turns away out of a log at the default level. Metrics count them.
func levelFor(route string, status int) slog.Level {
	switch {
	case route == "/readyz" || route == "/livez" || status == http.StatusServiceUnavailable || status == http.StatusTooManyRequests:
		return slog.LevelDebug
	case status >= http.StatusInternalServerError:
		return slog.LevelError
	case status >= http.StatusBadRequest:
		return slog.LevelInfo
	}
	return slog.LevelDebug
}

// methodLabel keeps the label values of metrics a closed set.
func methodLabel(method string) string {
	if slices.Contains([]string{http.MethodGet, http.MethodHead, http.MethodPost, http.MethodPut, http.MethodPatch, http.MethodDelete, http.MethodOptions}, method) {
		return method
	}
	return "other"
}

// recover answers a panic with a bare 500 and logs where it came from.
func (a *API) recover(c *gin.Context) {
	defer func() {
		cause := recover()
		if cause == nil {
			return
		}
		if cause == http.ErrAbortHandler { //nolint:errorlint // net/http documents this very value
			panic(cause) // net/http cuts the connection, as a broken stream must be
		}
		a.log.LogAttrs(c.Request.Context(), slog.LevelError, "panic", slog.String("cause", fmt.Sprint(cause)), slog.String("stack", string(debug.Stack())))
		c.Abort()
		if !c.Writer.Written() {
			a.problem(blank())(c)
		}
	}()
	c.Next()
}
