package api

import (
	"context"
	"errors"
	"testing"
	"testing/synctest"
	"time"
)

// A deadline ends alike for who asks and for who waits, and can be put off for both.
func TestDeadlineContext(t *testing.T) {
	for _, waits := range []bool{false, true} {
		synctest.Test(t, func(t *testing.T) {
			d := newDeadline(t.Context(), &ticket{}, time.Second, time.Now)
			defer d.close()
			if waits {
				d.Done()
			}
			time.Sleep(900 * time.Millisecond)
			d.extend(time.Second)
			time.Sleep(900 * time.Millisecond)
			synctest.Wait()
			if err := d.Err(); err != nil {
				t.Errorf("waits %v: ended 0.1 s before the deadline that was put off: %v", waits, err)
			}
			time.Sleep(200 * time.Millisecond)
			synctest.Wait()
			if d.Err() == nil || context.Cause(d) == nil {
				t.Errorf("waits %v: not ended 0.1 s after the deadline", waits)
			}
			select {
			case <-d.Done():
			default:
				synctest.Wait() // the timer that Done made has run out already
				select {
				case <-d.Done():
				default:
					t.Errorf("waits %v: Done is open after the deadline", waits)
				}
			}
		})
	}
}

// A context made from a deadline ends with it and knows why.
func TestDeadlineChild(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		mine := &ticket{}
		d := newDeadline(t.Context(), mine, time.Second, time.Now)
		defer d.close()
		child, cancel := context.WithTimeout(d, time.Hour)
		defer cancel()
		if got, _ := child.Value(ticketContextKey{}).(*ticket); got != mine {
			t.Error("the ticket is lost")
		}
		<-child.Done()
		if cause := context.Cause(child); !errors.Is(cause, errDeadline) {
			t.Errorf("cause %v", cause)
		}
	})
}

// The context ends with the request and when it is closed, whichever comes first, and closing it leaves no timer behind.
func TestDeadlineEnds(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		request, gone := context.WithCancelCause(t.Context())
		d := newDeadline(request, &ticket{}, time.Second, time.Now)
		why := errors.New("the client left")
		gone(why)
		if !errors.Is(context.Cause(d), why) || !errors.Is(d.Err(), context.Canceled) {
			t.Errorf("%v because of %v", d.Err(), context.Cause(d))
		}
		d.close()

		d = newDeadline(t.Context(), &ticket{}, time.Second, time.Now)
		done := d.Done()
		d.close()
		<-done
		d = newDeadline(t.Context(), &ticket{}, time.Second, time.Now)
		d.close()
		<-d.Done()
		if !errors.Is(d.Err(), context.Canceled) {
			t.Error("a closed context goes on")
		}
	})
}
