package api

import (
	"fmt"
	"maps"
	"net/http"
	"net/url"
	"slices"
	"strings"

	"github.com/gin-gonic/gin"
)

// Headers that every answer has. What the service sends is data: nothing in it may run, whatever a browser takes it for.
var secureHeaders = map[string][]string{
	"X-Content-Type-Options":       {"nosniff"},
	"Content-Security-Policy":      {"default-src 'none'; style-src 'unsafe-inline'; frame-ancestors 'none'"}, // pictures style themselves
	"Referrer-Policy":              {"no-referrer"},
	"Cross-Origin-Resource-Policy": {"same-site"},
}

// oneYear is how long browsers use TLS alone once they have met it here.
var oneYear = []string{"max-age=31536000"}

// secure adds the headers that keep browsers from misusing an answer.
func (a *API) secure(c *gin.Context) {
	h := c.Writer.Header()
	maps.Copy(h, secureHeaders)
	if c.Request.TLS != nil {
		h["Strict-Transport-Security"] = oneYear
	}
	c.Next()
}

// ParseOrigins checks a list of origins that scripts may call from, such as https://quotes.example, with commas between. A
// single * stands for all.
func ParseOrigins(list string) ([]string, error) {
	var origins []string
	for origin := range strings.SplitSeq(list, ",") {
		origin = strings.TrimSpace(origin)
		if origin == "" {
			continue
		}
		u, err := url.Parse(origin)
		if origin != "*" && (err != nil || u.Scheme != "http" && u.Scheme != "https" || u.Host == "" || u.Scheme+"://"+u.Host != origin) {
			return nil, fmt.Errorf("%q is no origin; one has a scheme, a host and perhaps a port, such as https://quotes.example:8443", origin)
		}
		origins = append(origins, origin)
	}
	return origins, nil
}

const (
	crossMethods = "GET, HEAD, POST"
	crossHeaders = "Accept, Authorization, Content-Type, If-None-Match, Traceparent, Tracestate, X-Request-Id"
	crossExposed = "ETag, Retry-After, X-Request-Id, " + headHeader
)

// cross lets scripts of the origins allowed read answers, and answers what browsers ask before.
func (a *API) cross(c *gin.Context) {
	if len(a.origins) == 0 {
		c.Next()
		return
	}
	h := c.Writer.Header()
	h.Add("Vary", "Origin")
	origin := c.GetHeader("Origin")
	if origin == "" || !slices.Contains(a.origins, origin) && !slices.Contains(a.origins, "*") {
		c.Next()
		return
	}
	h.Set("Access-Control-Allow-Origin", origin)
	h.Set("Cross-Origin-Resource-Policy", "cross-origin")
	if c.Request.Method != http.MethodOptions || c.GetHeader("Access-Control-Request-Method") == "" {
		h.Set("Access-Control-Expose-Headers", crossExposed)
		c.Next()
		return
	}
	h.Set("Access-Control-Allow-Methods", crossMethods)
	h.Set("Access-Control-Allow-Headers", crossHeaders)
	h.Set("Access-Control-Max-Age", "600")
	c.Status(http.StatusNoContent)
	c.Writer.WriteHeaderNow()
	c.Abort()
}

// guarded reports whether a path is for clients with a token alone, and counts against their rate. Probes and the
// description of the interface are for everybody.
func guarded(path string) bool { return path == "/v1" || strings.HasPrefix(path, "/v1/") }

const clientKey = "client"

// authenticate turns requests without a valid token away, if tokens are asked for at all.
func (a *API) authenticate(c *gin.Context) {
	if a.tokens == nil || !guarded(c.Request.URL.Path) {
		c.Next()
		return
	}
	scheme, presented, _ := strings.Cut(c.GetHeader("Authorization"), " ")
	presented = strings.TrimSpace(presented)
	detail, challenge := "", `Bearer realm="dewmark"`
	switch {
	case !strings.EqualFold(scheme, "Bearer") || presented == "":
		detail = "this service wants a token: Authorization: Bearer TOKEN"
	default:
		if name := a.tokens.owner(presented); name != "" {
			c.Set(clientKey, name)
			c.Next()
			return
		}
		detail, challenge = "the token is not valid, or no longer", challenge+`, error="invalid_token"`
	}
	c.Header("WWW-Authenticate", challenge)
	c.Abort()
	a.fail(c, a.turnAway(refusedUnauthorized, refusal(http.StatusUnauthorized, "unauthorized", detail)))
}
