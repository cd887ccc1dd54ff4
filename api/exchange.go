package api

import (
	"cmp"
	"context"
	"crypto/sha256"
	"encoding/base64"
	"errors"
	"fmt"
	"io"
	"mime"
	"net/http"
	"strconv"
	"strings"
	"sync"
	"time"

	"github.com/gin-gonic/gin"
)

// The media types of the service.
const (
	mediaJSON    = "application/json"
	mediaProblem = "application/problem+json"
	mediaLines   = "application/x-ndjson"
	mediaCSV     = "text/csv"
)

// encoder is a response that writes itself. Others go through [encoding/json].
type encoder interface {
	// encode appends the response to b.
	encode(b []byte) ([]byte, error)
}

// typed is a response of a media type other than JSON.
type typed interface{ mediaType() string }

// handler answers a request with a value or an error; the adapters below write either.
type handler func(c *gin.Context) (any, error)

// handle adapts f. Offers are the media types that f can answer with, JSON unless given.
func (a *API) handle(f handler, offers ...string) gin.HandlerFunc {
	if len(offers) == 0 {
		offers = []string{mediaJSON}
	}
	return func(c *gin.Context) {
		v, err := negotiated(c, f, offers)
		if err == nil {
			err = a.write(c, http.StatusOK, mediaJSON, v)
		}
		if err != nil {
			a.fail(c, err)
		}
	}
}

// cached is handle for answers that stay the same while the version does: with an entity tag, and 304 for who has it.
func (a *API) cached(f handler, media string) gin.HandlerFunc {
	return func(c *gin.Context) {
		v, err := negotiated(c, f, []string{media})
		var body []byte
		if err == nil {
			body, err = encode(nil, v)
		}
		if err != nil {
			a.fail(c, err)
			return
		}
		sum := sha256.Sum256(body)
		tag := `"` + base64.RawURLEncoding.EncodeToString(sum[:12]) + `"`
		c.Header("ETag", tag)
		c.Header("Cache-Control", a.cacheControl)
		if matches(c.GetHeader("If-None-Match"), tag) {
			c.Status(http.StatusNotModified)
			c.Writer.WriteHeaderNow()
			return
		}
		send(c, http.StatusOK, media, body)
	}
}

// matches compares entity tags weakly, as RFC 9110 section 13.1.2 wants for If-None-Match.
func matches(header, tag string) bool {
	for candidate := range strings.SplitSeq(header, ",") {
		candidate = strings.TrimPrefix(strings.TrimSpace(candidate), "W/")
		if candidate == tag || candidate == "*" {
			return true
		}
	}
	return false
}

// negotiated calls f if the client accepts an offer. The one chosen is in [accepted].
func negotiated(c *gin.Context, f handler, offers []string) (any, error) {
	c.Writer.Header().Add("Vary", "Accept")
	media := negotiate(c.GetHeader("Accept"), offers)
	if media == "" {
		return nil, refusal(http.StatusNotAcceptable, "not-acceptable", "Accept admits none of "+strings.Join(offers, ", ")+", the media types that this resource has")
	}
	c.Set(acceptedKey, media)
	return f(c)
}

const acceptedKey = "accepted"

// accepted returns the media type that the client wants of those offered.
func accepted(c *gin.Context) string { return c.GetString(acceptedKey) }

// negotiate returns the offer that an Accept header rates highest, the earlier of equals, or "".
func negotiate(accept string, offers []string) string {
	if strings.TrimSpace(accept) == "" {
		return offers[0]
	}
	best, bestQuality := "", 0.
	for _, offer := range offers {
		quality, precision := 0., -1
		for part := range strings.SplitSeq(accept, ",") {
			media, params, err := mime.ParseMediaType(part)
			if err != nil {
				continue
			}
			p := -1
			switch family, _, _ := strings.Cut(offer, "/"); media {
			case offer:
				p = 2
			case family + "/*":
				p = 1
			case "*/*":
				p = 0
			}
			if p < precision || p < 0 {
				continue
			}
			precision, quality = p, 1
			if q, err := strconv.ParseFloat(params["q"], 64); err == nil {
				quality = q
			}
		}
		if quality > bestQuality {
			best, bestQuality = offer, quality
		}
	}
	return best
}

// buffers holds what responses are encoded into.
var buffers = sync.Pool{New: func() any { return new([]byte) }}

// largestKept is the capacity up to which a buffer goes back to the pool.
const largestKept = 1 << 20

// takeBuffer returns an empty buffer from the pool.
func takeBuffer() *[]byte {
	buffer := buffers.Get().(*[]byte)
	*buffer = (*buffer)[:0]
	return buffer
}

// giveBack returns a buffer to the pool, after which nobody may use it.
func giveBack(buffer *[]byte) {
	if cap(*buffer) <= largestKept {
		buffers.Put(buffer)
	}
}

// write encodes v before it sends anything, so that a value that cannot be written becomes a 500 and not half an answer.
func (a *API) write(c *gin.Context, status int, media string, v any) error {
	buffer := takeBuffer()
	body, err := encode(*buffer, v)
	if err == nil {
		if t, ok := v.(typed); ok {
			media = t.mediaType()
		}
		send(c, status, media, body)
	}
	*buffer = body
	giveBack(buffer)
	return err
}

// raw is a body that is written as it is.
type raw []byte

func (r raw) encode(b []byte) ([]byte, error) { return append(b, r...), nil }

func encode(b []byte, v any) ([]byte, error) {
	var err error
	if e, ok := v.(encoder); ok {
		b, err = e.encode(b)
	} else {
		b, err = appendValue(b, v)
	}
	if len(b) > 0 && b[len(b)-1] != '\n' {
		b = append(b, '\n')
	}
	return b, err
}

// slowest is the bytes a second that a client must take of a large answer: a megabit.
const slowest = 128 << 10

func send(c *gin.Context, status int, media string, body []byte) {
	c.Header("Content-Type", media)
	c.Header("Content-Length", strconv.Itoa(len(body)))
	c.Status(status)
	if t := ticketOf(c); t != nil {
		t.pause() // who reads slowly holds no slot
		event(t.ctx, "computed")
	}
	if len(body) > longBody { // less goes to the network at once
		allowed := patience/2 + time.Duration(len(body)/slowest)*time.Second
		_ = http.NewResponseController(c.Writer).SetWriteDeadline(time.Now().Add(allowed)) // recorders of tests cannot
	}
	_, err := c.Writer.Write(body)
	if err != nil {
		_ = c.Error(err) // for the request log; the client is gone
	}
}

// statusClientGone is what the log and the metrics show of a request whose client did not wait. Nobody receives it.
const statusClientGone = 499

// fail answers with the problem that err is.
func (a *API) fail(c *gin.Context, err error) {
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) { // which of them is the cause?
		err = cmp.Or(context.Cause(contextOf(c)), err)
	}
	if errors.Is(err, context.DeadlineExceeded) {
		err = errDeadline
	}
	_ = c.Error(err) // for the request log
	if errors.Is(err, context.Canceled) {
		c.Status(statusClientGone)
		return
	}
	if errors.Is(err, errDeadline) {
		a.metrics.refused.WithLabelValues(refusedDeadline).Inc()
	}
	a.problem(problemFor(err))(c)
}

// problem answers with p, which it does not change.
func (a *API) problem(p *Problem) gin.HandlerFunc {
	return func(c *gin.Context) {
		here := *p
		here.Instance = c.Request.URL.EscapedPath()
		h := c.Writer.Header()
		h.Del("ETag")
		h.Del("Cache-Control")
		if p.Status == http.StatusServiceUnavailable && h.Get("Retry-After") == "" {
			h.Set("Retry-After", "1")
		}
		if err := a.write(c, p.Status, mediaProblem, &here); err != nil {
			_ = c.Error(err)
			_ = a.write(c, http.StatusInternalServerError, mediaProblem, blank())
		}
	}
}

// decode reads the JSON body of a request into v and checks it.
func (a *API) decode(c *gin.Context, v any) error {
	if !hasMedia(c, mediaJSON) {
		return otherMedia(c, mediaJSON)
	}
	body, err := a.body(c)
	if err != nil {
		return err
	}
	if err := a.admit(c); err != nil {
		return err
	}
	return a.read(body, v)
}

// read decodes and validates JSON text.
func (a *API) read(text []byte, v any) error {
	if err := decodeJSON(text, v); err != nil {
		return err
	}
	return validate(v)
}

// body reads the body of a request up to the limit. A large one needs a place among the batches.
func (a *API) body(c *gin.Context) ([]byte, error) {
	size := c.Request.ContentLength // -1 where the client does not tell, and 0 where a caller without a network does not
	if size > a.maxBody {
		return nil, a.tooLarge()
	}
	if 0 < size && size <= longBody {
		body := make([]byte, size)
		if _, err := io.ReadFull(c.Request.Body, body); err != nil {
			return nil, errCutBody
		}
		return body, nil
	}
	bounded := http.MaxBytesReader(c.Writer, c.Request.Body, a.maxBody)
	body, err := io.ReadAll(io.LimitReader(bounded, longBody+1))
	if err == nil && len(body) > longBody {
		if err := ticketOf(c).lengthen(); err != nil {
			return nil, err
		}
		var rest []byte
		rest, err = io.ReadAll(bounded)
		body = append(body, rest...)
	}
	if _, ok := errors.AsType[*http.MaxBytesError](err); ok {
		return nil, a.tooLarge()
	}
	if err != nil {
		return nil, errCutBody
	}
	return body, nil
}

func (a *API) tooLarge() *Problem {
	return refusal(http.StatusRequestEntityTooLarge, "body-too-large",
		fmt.Sprintf("the body may have %d bytes at most; send larger batches as application/x-ndjson", a.maxBody))
}

var errCutBody = malformed("#", "the body could not be read to its end")

// hasMedia reports whether the body is of that media type, in UTF-8.
func hasMedia(c *gin.Context, want string) bool {
	given := c.GetHeader("Content-Type")
	if given == mediaJSON || given == mediaLines {
		return given == want // nearly all clients write it so
	}
	media, params, err := mime.ParseMediaType(given)
	charset := params["charset"]
	return err == nil && media == want && (charset == "" || strings.EqualFold(charset, "utf-8"))
}

// otherMedia refuses a body that is of none of the media types that a resource reads.
func otherMedia(c *gin.Context, read ...string) error {
	detail := "the body has no Content-Type"
	if given := c.GetHeader("Content-Type"); given != "" {
		detail = "Content-Type " + quote(given) + " is not read here"
	}
	return refusal(http.StatusUnsupportedMediaType, "unsupported-media-type", detail+"; send "+strings.Join(read, " or ")+" in UTF-8")
}
