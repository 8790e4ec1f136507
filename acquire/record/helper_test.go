package record

import (
	"errors"
	"io"
	"math"
	"slices"
	"sync"
	"testing"
	"time"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/wav"
)

const testRateHz = 1000

var errDisk = errors.New("disk on fire")

// A list is a source of frames and losses in a given order.
type list struct {
	channels int
	parts    []any // []float64 or an error that wraps an *acquire.GapError
	end      error
}

func (l *list) RateHz() float64 { return testRateHz }
func (l *list) Channels() int   { return l.channels }

func (l *list) Read(dst []float64) (int, error) {
	if len(l.parts) == 0 {
		return 0, l.end
	}
	switch part := l.parts[0].(type) {
	case []float64:
		n := copy(dst, part)
		if l.parts[0] = part[n:]; n == len(part) {
			l.parts = l.parts[1:]
		}
		return n / l.channels, nil
	case error:
		l.parts = l.parts[1:]
		return 0, part
	}
	panic("record: unknown part")
}

func (l *list) clone() *list {
	c := *l
	c.parts = slices.Clone(l.parts)
	return &c
}

// A stub is a file in memory that can be slow, or break.
type stub struct {
	mu        sync.Mutex
	gate      chan struct{} // each Write takes one from it; nil is an open gate
	samples   []float64
	count     int64 // samples, also of those that are forgotten
	forget    bool
	breakAt   int64 // Write returns an error that would go beyond so many samples; 0 is never
	syncErr   error
	closeErr  error
	took      time.Duration // of a Write
	refreshed []int64       // samples at each RefreshHeader
	closed    int
}

func (s *stub) Write(frames []float64) error {
	if s.gate != nil {
		<-s.gate
	}
	time.Sleep(s.took)
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.breakAt > 0 && s.count+int64(len(frames)) > s.breakAt {
		return errDisk
	}
	s.count += int64(len(frames))
	if !s.forget {
		s.samples = append(s.samples, frames...)
	}
	return nil
}

func (s *stub) RefreshHeader() error {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.refreshed = append(s.refreshed, s.count)
	return s.syncErr
}

func (s *stub) Close() error {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.closed++
	return s.closeErr
}

// on records float64 samples of channels into s, with room for queued frames.
func on(s *stub, channels int, queued int64) *Recorder {
	return onWith(s, channels, queued, nil)
}

func onWith(s *stub, channels int, queued int64, onError func(error)) *Recorder {
	o := Options{RateHz: testRateHz, Channels: channels, Encoding: wav.Float64, OnError: onError}
	return start("run.wav", s, o, queued, refreshInterval)
}

// counting is n frames whose samples are all different, from frame number first on. A float32 holds
// them exactly.
func counting(channels int, first, n int64) []float64 {
	samples := make([]float64, n*int64(channels))
	for i := range samples {
		samples[i] = float64(first*int64(channels)+int64(i)+1) / (1 << 23)
	}
	return samples
}

// everything is what a source gives, with lost frames as NaN.
func everything(t testing.TB, s acquire.Source) []float64 {
	t.Helper()
	stretches, err := sourcetest.Drain(t, s, 300)
	if err != io.EOF {
		t.Fatalf("ended by %v", err)
	}
	var all []float64
	for _, s1 := range stretches {
		all = append(all, s1.Samples...)
		all = append(all, slices.Repeat([]float64{math.NaN()}, int(s1.Lost)*s.Channels())...)
	}
	return all
}

// sameBits compares also infinities and the sign of zero; all NaN are equal.
func sameBits(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || a != a && b != b
}

func equal(t testing.TB, got, want []float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%d samples, want %d", len(got), len(want))
	}
	for i := range want {
		if !sameBits(got[i], want[i]) {
			t.Fatalf("sample %d is %v, want %v", i, got[i], want[i])
		}
	}
}
