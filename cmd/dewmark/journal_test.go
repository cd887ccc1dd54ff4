package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	"dewmark/api"
)

// lines returns the lines of text.
func lines(text []byte) []string { return strings.Split(strings.TrimSuffix(string(text), "\n"), "\n") }

// What was logged is written in its order, and all of it by the time that close returns.
func TestJournal(t *testing.T) {
	var out bytes.Buffer
	j := newJournal(&out)
	for i := range 20_000 { // some 100 kB: with room
		fmt.Fprintln(j, i)
	}
	j.close()
	got := lines(out.Bytes())
	if len(got) != 20_000 || j.lost() != 0 {
		t.Fatalf("%d lines written, %d lost", len(got), j.lost())
	}
	for i, line := range got {
		if line != strconv.Itoa(i) {
			t.Fatalf("line %d: %s", i, line)
		}
	}
	fmt.Fprintln(j, "late")
	if j.lost() != 1 {
		t.Error("a line after close is not counted as lost")
	}
}

// Nobody reads the log. Who logs goes on, errors find room after others do not, what is lost is counted, and all that was not
// arrives once somebody reads.
func TestJournalThatNobodyReads(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		reader, writer := io.Pipe()
		j := newJournal(writer)
		log := slog.New(j.handler(slog.LevelInfo)).With(slog.String("service", "test"))
		const records = 20_000
		for i := range records {
			log.LogAttrs(t.Context(), slog.LevelInfo, "request", slog.Int("n", i), slog.String("detail", strings.Repeat("x", 100)))
			if i == 0 {
				synctest.Wait() // it waits for a reader
			}
		}
		lost := j.lost()
		log.Error("panic")
		log.Debug("unwanted")
		if lost == 0 || lost >= records || j.lost() != lost {
			t.Fatalf("%d records lost, then %d", lost, j.lost())
		}
		text := make(chan []byte)
		go func() {
			all, err := io.ReadAll(reader)
			if err != nil {
				t.Error(err)
			}
			text <- all
		}()
		synctest.Wait()
		j.close()
		writer.Close()
		requests, last, seen := 0, -1, map[string]int{}
		for _, line := range lines(<-text) {
			var record struct {
				Msg        string
				N, Records int
			}
			if err := json.Unmarshal([]byte(line), &record); err != nil {
				t.Fatalf("%q: %v", line, err)
			}
			switch seen[record.Msg]++; record.Msg {
			case "request":
				if requests++; record.N <= last {
					t.Fatalf("record %d after %d", record.N, last)
				}
				last = record.N
			case "log records dropped":
				if record.Records != lost {
					t.Errorf("told of %d lost records, not of %d", record.Records, lost)
				}
			}
		}
		if requests != records-lost || seen["panic"] != 1 || seen["log records dropped"] != 1 || len(seen) != 3 {
			t.Errorf("%d requests and %d lost, %v", requests, lost, seen)
		}
	})
}

// stuck is a writer whose reader has gone to sleep for good.
type stuck chan struct{}

func (s stuck) Write([]byte) (int, error) {
	<-s
	return 0, io.ErrClosedPipe
}

// The end of the process waits a second for the log, not for ever, even where it has a failure to tell of.
func TestEndWithALogThatNobodyReads(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		pipe := make(stuck)
		begun := time.Now()
		if code := run(t.Context(), []string{"--drain", "-1s"}, nil, nil, pipe); code != exitOther {
			t.Errorf("exit %d", code)
		}
		if took := time.Since(begun); took != journalPatience {
			t.Errorf("the end took %v", took)
		}
		close(pipe)
	})
}

// disk takes bytes while it has room.
type disk struct {
	bytes.Buffer

	room atomic.Int64
}

func (d *disk) Write(p []byte) (int, error) {
	n := min(len(p), int(d.room.Load()))
	d.room.Add(int64(-n))
	d.Buffer.Write(p[:n])
	if n < len(p) {
		return n, errors.New("no space left on device")
	}
	return n, nil
}

// A disk fills in the middle of a line and has room again later: the line after the torn one is whole.
func TestJournalOnAFullDisk(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var d disk
		d.room.Store(8)
		j := newJournal(&d)
		for _, line := range []string{"first\n", "second\n", "third\n"} {
			_, _ = j.Write([]byte(line))
			synctest.Wait()
		}
		if j.lost() != 2 {
			t.Errorf("%d lines lost", j.lost())
		}
		d.room.Store(1 << 20)
		_, _ = j.Write([]byte("fourth\n"))
		j.close()
		got := lines(d.Bytes())
		if len(got) != 4 || got[0] != "first" || got[1] != "se" || got[2] != "fourth" || !strings.Contains(got[3], `"msg":"log records dropped","records":2}`) {
			t.Errorf("%q", got)
		}
	})
}

// The metric shows what the log has lost.
func TestJournalMetric(t *testing.T) {
	a, err := newAPI(slog.New(slog.DiscardHandler), func(o *api.Options) { o.LogLost = func() int { return 3 } })
	if err != nil {
		t.Fatal(err)
	}
	answer := httptest.NewRecorder()
	a.AdminHandler().ServeHTTP(answer, httptest.NewRequest(http.MethodGet, "/metrics", http.NoBody))
	if !strings.Contains(answer.Body.String(), "\ndewmark_log_records_dropped_total 3\n") {
		t.Error("/metrics does not have the 3 records that were lost")
	}
}
