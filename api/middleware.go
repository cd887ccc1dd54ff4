package api

import (
	"cmp"
	"fmt"
	"log/slog"
	"net/http"
	"runtime/debug"
	"slices"
	"strconv"

	"github.com/gin-gonic/gin"
)

// observe counts, times and logs every request. It is the outermost middleware, so that it sees the status of a
// recovered panic.
func (a *API) observe(c *gin.Context) {
	start := a.now()
	defer func() {
		seconds, status := a.now().Sub(start).Seconds(), c.Writer.Status()
		route := cmp.Or(c.FullPath(), "unmatched") // never the raw path, of which there is no end
		a.metrics.request(route, methodLabel(c.Request.Method), strconv.Itoa(status), seconds)
		a.log.LogAttrs(c.Request.Context(), levelFor(route, status), "request",
			slog.String("method", c.Request.Method), slog.String("route", route), slog.Int("status", status),
			slog.Float64("duration_s", seconds), slog.Int("bytes", max(c.Writer.Size(), 0)), slog.Any("err", c.Errors.Errors()))
	}()
	c.Next()
}

// levelFor keeps probes and good answers out of a log at the default level.
func levelFor(route string, status int) slog.Level {
	switch {
	case route == "/readyz" || route == "/livez":
		return slog.LevelDebug
	case status >= http.StatusInternalServerError && status != http.StatusServiceUnavailable:
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
