package main

import (
	"bytes"
	"context"
	"io"
	"log/slog"
	"sync"
	"time"
)

// A record of a request has some 300 bytes, so that the room holds a second of 3500 requests.
const (
	journalRoom     = 1 << 20             // bytes of records that wait to be written
	ordinaryRoom    = journalRoom * 7 / 8 // of those below ERROR; the rest is for errors alone
	journalKept     = 64 << 10            // bytes of an empty buffer that stay allocated
	journalPatience = time.Second         // for what is left at the end of the process
)

// journal is a log that a goroutine of its own writes. Those who log never wait: a reader that has stopped reading would stop
// the service. Lines that find no room, or cannot be written, are dropped and counted, and once writing works a record says how
// many there were.
type journal struct {
	out  io.Writer
	torn bool          // the last line written lacks its end
	wake chan struct{} // holds one when there may be something to do
	done chan struct{} // closed when nothing is written any more

	mu      sync.Mutex
	waiting []byte
	untold  int // lines dropped that no record tells of yet
	dropped int // lines dropped since the start
	closed  bool
}

func newJournal(out io.Writer) *journal {
	j := &journal{out: out, wake: make(chan struct{}, 1), done: make(chan struct{})}
	go j.run()
	return j
}

// Write takes whole lines. It neither waits nor fails.
func (j *journal) Write(lines []byte) (int, error) { return j.take(lines, journalRoom) }

// ordinary is a journal for records below ERROR.
type ordinary struct{ *journal }

// Write takes whole lines unless what room is left is for errors.
func (o ordinary) Write(lines []byte) (int, error) { return o.take(lines, ordinaryRoom) }

func (j *journal) take(lines []byte, room int) (int, error) {
	j.mu.Lock()
	if j.closed || len(j.waiting)+len(lines) > room {
		j.drop(lines)
	} else {
		j.waiting = append(j.waiting, lines...)
	}
	j.mu.Unlock()
	j.stir()
	return len(lines), nil
}

// drop counts lines as lost. The caller holds the lock.
func (j *journal) drop(lines []byte) {
	n := bytes.Count(lines, []byte{'\n'})
	j.untold += n
	j.dropped += n
}

// lost returns how many lines were dropped since the start.
func (j *journal) lost() int {
	j.mu.Lock()
	defer j.mu.Unlock()
	return j.dropped
}

func (j *journal) stir() {
	select {
	case j.wake <- struct{}{}:
	default: // it will look anyway
	}
}

// close writes what waits, for as long as journalPatience.
func (j *journal) close() {
	j.mu.Lock()
	j.closed = true
	j.mu.Unlock()
	j.stir()
	select {
	case <-j.done:
	case <-time.After(journalPatience):
	}
}

// run writes in one piece what came while it wrote the piece before.
func (j *journal) run() {
	defer close(j.done)
	var batch []byte
	for range j.wake {
		j.mu.Lock()
		batch, j.waiting = j.waiting, batch[:0]
		untold, closed := j.untold, j.closed
		j.mu.Unlock()
		n, err := j.write(batch)
		if err == nil && untold > 0 {
			err = j.tell(untold)
		} else {
			untold = 0
		}
		j.mu.Lock()
		if j.drop(batch[n:]); err == nil {
			j.untold -= untold
		}
		j.mu.Unlock()
		if cap(batch) > journalKept {
			batch = nil
		}
		if closed {
			return
		}
	}
}

// write writes lines and returns how many of their bytes are written.
func (j *journal) write(lines []byte) (int, error) {
	if j.torn {
		if _, err := j.out.Write([]byte{'\n'}); err != nil {
			return 0, err
		}
		j.torn = false
	}
	if len(lines) == 0 {
		return 0, nil
	}
	n, err := j.out.Write(lines)
	j.torn = n > 0 && lines[n-1] != '\n'
	return n, err
}

// tell records that n lines were dropped.
func (j *journal) tell(n int) error {
	record := slog.NewRecord(time.Now(), slog.LevelWarn, "log records dropped", 0)
	record.AddAttrs(slog.Int("records", n))
	var line bytes.Buffer
	_ = slog.NewJSONHandler(&line, nil).Handle(context.Background(), record)
	_, err := j.write(line.Bytes())
	return err
}

// handler returns a handler of records from level on.
func (j *journal) handler(level slog.Level) slog.Handler {
	o := &slog.HandlerOptions{Level: level}
	return journalHandler{slog.NewJSONHandler(ordinary{j}, o), slog.NewJSONHandler(j, o)}
}

// journalHandler lets errors have the room that other records must leave.
type journalHandler struct {
	slog.Handler

	errors slog.Handler
}

func (h journalHandler) Handle(ctx context.Context, r slog.Record) error {
	if r.Level >= slog.LevelError {
		return h.errors.Handle(ctx, r)
	}
	return h.Handler.Handle(ctx, r)
}

func (h journalHandler) WithAttrs(attrs []slog.Attr) slog.Handler {
	return journalHandler{h.Handler.WithAttrs(attrs), h.errors.WithAttrs(attrs)}
}

func (h journalHandler) WithGroup(name string) slog.Handler {
	return journalHandler{h.Handler.WithGroup(name), h.errors.WithGroup(name)}
}
