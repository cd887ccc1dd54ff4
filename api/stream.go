package api

import (
	"bufio"
	"bytes"
	"errors"
	"io"
	"net/http"
	"strconv"
	"time"
	"unicode/utf16"

	"github.com/gin-gonic/gin"
)

// statesHead is the first line of a stream of points: all of a request but its points.
type statesHead struct {
	calculation
	Properties []string `json:"properties" validate:"max=64"`
}

const (
	maxLine = 64 << 10 // bytes; a point has a few hundred at most
	// patience is how long a stream may stand still in either direction.
	patience = time.Minute
)

// headHeader carries what a stream or a table of lines has no line for: refrigerant, datum, units, basis and cautions, as
// JSON in ASCII.
const headHeader = "Dewmark-Head"

// postStates answers POST /v1/states in the form of the request.
func (a *API) postStates(c *gin.Context) {
	if !hasMedia(c, mediaLines) {
		a.handle(a.states)(c)
		return
	}
	if err := a.streamStates(c); err != nil {
		a.fail(c, err)
	}
}

// streamStates answers a stream of points, one line in, one line out, in memory that does not grow. It returns an error
// while nothing is sent yet.
func (a *API) streamStates(c *gin.Context) error {
	var w *worker
	defer func() {
		if w != nil {
			a.metrics.calculated("state", &w.account)
		}
	}()
	return a.answerLines(c, func(first []byte) (*lineAnswers, error) {
		var head statesHead
		if err := a.read(first, &head); err != nil {
			return nil, err
		}
		j, err := a.begin(&head.calculation)
		if err != nil {
			return nil, err
		}
		shown, err := selectFields(head.Properties)
		if err != nil {
			return nil, err
		}
		j.basis.Transport = transportBases(j.r, shown)
		if err := j.announce(c, shown.kinds()); err != nil {
			return nil, err
		}
		w = newWorker(j, shown)
		w.stream = true
		return &lineAnswers{line: func(out, text []byte, broken error, n int) ([]byte, error) {
			return w.line(out, text, broken, place{"#/points", n}), nil
		}}, nil
	})
}

// lineAnswers answers the lines behind the head of a stream.
type lineAnswers struct {
	// line adds the answer to line n, or to the error that came instead: it is too long. An error of its own ends the stream.
	line func(out, text []byte, broken error, n int) ([]byte, error)
	end  func(out []byte) ([]byte, error) // adds what closes the stream; nil for nothing
}

// answerLines answers a stream whose first line goes to begin. It returns an error while nothing is sent yet.
func (a *API) answerLines(c *gin.Context, begin func(first []byte) (*lineAnswers, error)) error {
	if negotiate(c.GetHeader("Accept"), []string{mediaLines}) == "" {
		return refusal(http.StatusNotAcceptable, "not-acceptable", "Accept does not admit "+mediaLines+", in which a stream is answered")
	}
	t, end, err := a.stream(c)
	if err != nil {
		return err
	}
	defer end()
	connection := http.NewResponseController(c.Writer)
	_ = connection.SetReadDeadline(a.now().Add(patience)) // recorders of tests cannot
	lines := lineReader{bufio.NewReaderSize(c.Request.Body, maxLine)}
	first, err := lines.next()
	if err != nil {
		return malformed("#", "the first line holds no head")
	}
	if err := t.start(); err != nil {
		return err
	}
	answers, err := begin(first)
	if err != nil {
		return err
	}
	_ = connection.EnableFullDuplex() // without it HTTP/1 would read all before the first answer
	c.Header("Content-Type", mediaLines)
	c.Status(http.StatusOK)

	var out []byte
	// flush hands over what is done. It holds no slot, since the client may be slow to take it.
	flush := func() error {
		t.pause()
		_ = connection.SetWriteDeadline(a.now().Add(patience))
		_, err := c.Writer.Write(out)
		out = out[:0]
		return err
	}
	for n := 0; ; n++ {
		if !lines.waiting() { // about to wait for the client
			if flush() != nil {
				return nil // the client is gone
			}
			_ = connection.Flush()
			_ = connection.SetReadDeadline(a.now().Add(patience))
		}
		line, err := lines.next()
		if errors.Is(err, io.EOF) {
			a.metrics.batch(c, n)
			if answers.end != nil {
				if out, err = answers.end(out); err != nil {
					panic(http.ErrAbortHandler)
				}
			}
			_ = flush()
			return nil
		}
		if err != nil && !errors.Is(err, bufio.ErrBufferFull) {
			_ = flush()
			panic(http.ErrAbortHandler) // the request broke off; the answer must not look complete
		}
		if n%chunkSize == chunkSize-1 {
			_ = t.breathe() // if it fails, so does the next line
		}
		if t.resume() != nil {
			panic(http.ErrAbortHandler) // the client is gone, or soon will be
		}
		if out, err = answers.line(out, line, err, n); err != nil {
			_ = c.Error(err) // for the request log
			panic(http.ErrAbortHandler)
		}
		out = append(out, '\n')
		if len(out) >= maxLine && flush() != nil {
			return nil
		}
	}
}

// line answers one line of a stream, or the error that came instead. Its problems point as those of a batch do.
func (w *worker) line(b, text []byte, err error, at place) []byte {
	var p point
	var problem *Problem
	if err != nil {
		problem = invalidItem(MemberError{Pointer: at.String(), Code: "too_long", Detail: "a line may have " + strconv.Itoa(maxLine) + " bytes at most"})
	} else if err := decodeJSON(text, &p); err != nil {
		problem = problemFor(err).below(at.String())
	}
	if problem == nil {
		return w.item(b, &p, at)
	}
	w.count(problem, false)
	return failedItem(b, &p, problem)
}

// lineReader reads lines that are not empty.
type lineReader struct{ *bufio.Reader }

// next returns the next line. It returns [bufio.ErrBufferFull] for one that is too long, having read over it.
func (l lineReader) next() ([]byte, error) {
	for {
		line, err := l.ReadSlice('\n')
		tooLong := err
		for errors.Is(err, bufio.ErrBufferFull) {
			_, err = l.ReadSlice('\n')
		}
		switch line = bytes.TrimSpace(line); {
		case err != nil && !errors.Is(err, io.EOF):
			return nil, err
		case errors.Is(tooLong, bufio.ErrBufferFull):
			return nil, tooLong
		case len(line) > 0:
			return line, nil // the end of the body shows at the next call
		case err != nil:
			return nil, err
		}
	}
}

// waiting reports whether next has a line to return without reading any more.
func (l lineReader) waiting() bool {
	arrived, _ := l.Peek(l.Buffered())
	return bytes.IndexByte(bytes.TrimLeft(arrived, " \t\r\n"), '\n') >= 0
}

// announce sends what lines have no place for in a header.
func (j *job) announce(c *gin.Context, kinds []kind) error {
	o := begin(nil)
	if err := j.head(&o, kinds); err != nil {
		return err
	}
	if err := j.tail(&o); err != nil {
		return err
	}
	c.Header(headHeader, asciiJSON(o.end()))
	return nil
}

// asciiJSON escapes what is not ASCII in JSON text.
func asciiJSON(text []byte) string {
	const hex = "0123456789abcdef"
	out := make([]byte, 0, len(text))
	for _, r := range string(text) {
		if r < 0x7f {
			out = append(out, byte(r))
			continue
		}
		for _, u := range utf16.AppendRune(nil, r) {
			out = append(out, '\\', 'u', hex[u>>12], hex[u>>8&15], hex[u>>4&15], hex[u&15])
		}
	}
	return string(out)
}
