package record

import (
	"errors"
	"io"
	"math"
	"slices"
	"testing"
	"testing/synctest"
	"time"

	"shakerwatch/acquire"
)

// In these tests a capture that waits for the disk is a deadlock, which synctest finds at once.

func TestSlowDisk(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		const channels, queued = 3, 100
		file := &stub{gate: make(chan struct{})}
		r := on(file, channels, queued)
		want := counting(channels, 0, 1000)
		s := Tee(&list{channels: channels, end: io.EOF, parts: []any{want}}, r)
		dst := make([]float64, channels*30)
		for range 1000 / 30 {
			if n, err := s.Read(dst); n != 30 || err != nil {
				t.Fatalf("Read = %d, %v", n, err)
			}
		}
		if c := r.Counts(); c != (Counts{Dropped: 990 - queued}) {
			t.Errorf("while the disk is stuck: %+v, want %d dropped", c, 990-queued)
		}
		close(file.gate)
		synctest.Wait()
		s.Read(dst) // the last 10, for which there is room again
		if err := r.Close(); err != nil {
			t.Fatal(err)
		}
		for i := queued * channels; i < 990*channels; i++ {
			want[i] = math.NaN()
		}
		equal(t, file.samples, want)
		if c := r.Counts(); c != (Counts{Frames: 1000, Dropped: 990 - queued, Bytes: 1000 * channels * 8}) {
			t.Errorf("in the end: %+v", c)
		}
	})
}

// A process that is killed loses what came after the last refresh.
func TestRefreshesEverySecond(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		file := &stub{}
		r := on(file, 1, 100)
		put := func(n int64) { r.queue.add(counting(1, 0, n)) }
		refreshes := func(want ...int64) {
			t.Helper()
			synctest.Wait()
			file.mu.Lock()
			defer file.mu.Unlock()
			if !slices.Equal(file.refreshed, want) {
				t.Errorf("refreshed at %d frames, want %d", file.refreshed, want)
			}
		}
		put(10)
		refreshes()
		time.Sleep(time.Second)
		refreshes(10)
		put(1)
		time.Sleep(time.Second)
		refreshes(10, 11)
		time.Sleep(time.Minute) // nothing new: the disk is left alone
		refreshes(10, 11)
		r.queue.skip(5)
		time.Sleep(time.Second)
		refreshes(10, 11, 16)
		if err := r.Close(); err != nil || file.closed != 1 {
			t.Errorf("Close says %v, closed %d times", err, file.closed)
		}
	})
}

// Also while a long gap is written the header is refreshed, and frames that come are kept.
func TestLongGap(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		const channels = 64
		file := &stub{forget: true, took: 10 * time.Millisecond} // a piece: 26 MB/s
		r := on(file, channels, 1000)
		piece := int64(len(r.gap) / channels)
		s := Tee(&list{channels: channels, end: io.EOF, parts: []any{
			&acquire.GapError{Frames: 1000 * piece}, counting(channels, 0, 300)}}, r)
		start := time.Now()
		dst := make([]float64, channels*300)
		s.Read(dst)
		if n, err := s.Read(dst); n != 300 || err != nil || time.Since(start) != 0 {
			t.Fatalf("Read = %d, %v after %v: want frames at once", n, err, time.Since(start))
		}
		if err := r.Close(); err != nil {
			t.Fatal(err)
		}
		if took := time.Since(start); took < 10*time.Second || took > 11*time.Second {
			t.Errorf("writing took %v", took)
		}
		if file.count != (1000*piece+300)*channels || r.Counts().Dropped != 0 {
			t.Errorf("%d samples, %+v", file.count, r.Counts())
		}
		if n := len(file.refreshed); n < 19 {
			t.Errorf("%d refreshes in ten seconds", n)
		}
	})
}

func TestBrokenDisk(t *testing.T) {
	for _, c := range []struct {
		name    string
		file    *stub
		written int64 // frames
		dropped int64 // of 300 captured after it broke and 100 before
	}{
		{"write", &stub{breakAt: 150}, 0, 300 + 100},
		{"second write", &stub{breakAt: 250}, 100, 300},
		{"refresh", &stub{syncErr: errDisk}, 100, 300},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				var reported []error
				r := onWith(c.file, 2, 1000, func(err error) { reported = append(reported, err) })
				s := Tee(&list{channels: 2, end: io.EOF, parts: []any{counting(2, 0, 400)}}, r)
				dst := make([]float64, 2*100)
				for range 4 {
					s.Read(dst)
					time.Sleep(2 * time.Second)
				}
				synctest.Wait()
				if len(reported) != 1 || !errors.Is(reported[0], errDisk) || !errors.Is(r.Err(), errDisk) {
					t.Errorf("reported %v, Err says %v", reported, r.Err())
				}
				if n, err := s.Read(dst); n != 0 || err != io.EOF {
					t.Errorf("the capture ends with %d, %v", n, err)
				}
				for range 2 {
					if err := r.Close(); !errors.Is(err, errDisk) {
						t.Errorf("Close says %v", err)
					}
				}
				if len(reported) != 1 || c.file.closed != 1 {
					t.Errorf("reported %d times, closed %d times; want once", len(reported), c.file.closed)
				}
				if got := r.Counts(); got.Frames != c.written || got.Dropped != c.dropped {
					t.Errorf("%+v, want %d frames and %d dropped", got, c.written, c.dropped)
				}
			})
		})
	}
}

func TestErrorOfClosing(t *testing.T) {
	var reported []error
	r := onWith(&stub{closeErr: errDisk}, 1, 10, func(err error) { reported = append(reported, err) })
	if err := r.Err(); err != nil {
		t.Errorf("Err says %v before Close", err)
	}
	if err := r.Close(); err != errDisk || r.Err() != errDisk || len(reported) != 1 {
		t.Errorf("Close says %v, Err %v, reported %v", err, r.Err(), reported)
	}
}

// An error of what was still in the queue when Close was called is an error of the recording, too.
func TestDiskBreaksWhileClosing(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		file := &stub{gate: make(chan struct{}), breakAt: 5}
		r := on(file, 1, 100)
		r.queue.add(counting(1, 0, 10))
		go func() {
			synctest.Wait() // until Close waits for the disk
			close(file.gate)
		}()
		if err := r.Close(); err != errDisk || file.closed != 1 {
			t.Errorf("Close says %v, closed %d times", err, file.closed)
		}
		if c := r.Counts(); c != (Counts{Dropped: 10}) {
			t.Errorf("%+v, want 10 dropped", c)
		}
	})
}
