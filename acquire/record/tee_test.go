package record

import (
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"testing"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
)

func sameStretch(a, b sourcetest.Stretch) bool {
	return a.Lost == b.Lost && slices.EqualFunc(a.Samples, b.Samples, sameBits)
}

// Also with a recorder that is stuck, broken or closed, the tee gives what the source gives.
func TestTeeGivesWhatTheSourceGives(t *testing.T) {
	gap := fmt.Errorf("overflow: %w", &acquire.GapError{Frames: 7})
	source := &list{channels: 2, end: errDisk, parts: []any{
		counting(2, 0, 900), gap, &acquire.GapError{Frames: 1},
		[]float64{math.NaN(), 1, 2, math.Inf(-1)}, counting(2, 912, 500),
	}}
	want, wantErr := sourcetest.Drain(t, source.clone(), 50)
	gate := make(chan struct{})
	for name, file := range map[string]*stub{
		"quick":  {},
		"stuck":  {gate: gate},
		"broken": {breakAt: 1},
	} {
		t.Run(name, func(t *testing.T) {
			r := on(file, 2, 100)
			if name != "quick" {
				r.queue.add(counting(2, 0, 1)) // something to be stuck in, or to break on
			}
			if name == "broken" {
				<-r.done
			}
			got, err := sourcetest.Drain(t, Tee(source.clone(), r), 50)
			if err != wantErr || !slices.EqualFunc(got, want, sameStretch) {
				t.Errorf("the tee gives %d stretches and %v, the source %d and %v", len(got), err, len(want), wantErr)
			}
			if name == "stuck" {
				close(gate)
			}
			r.Close()
			if n, err := Tee(source.clone(), r).Read(make([]float64, 4)); n != 2 || err != nil {
				t.Errorf("after Close: Read = %d, %v", n, err)
			}
		})
	}
}

// The very errors of the source come through, and its rate and channels.
func TestTeePassesErrorsOn(t *testing.T) {
	gap := fmt.Errorf("overflow: %w", &acquire.GapError{Frames: 7})
	r := on(&stub{}, 3, 100)
	defer r.Close()
	s := Tee(&list{channels: 3, end: io.EOF, parts: []any{gap}}, r)
	if s.Channels() != 3 || s.RateHz() != testRateHz {
		t.Errorf("%d channels at %v frames/s", s.Channels(), s.RateHz())
	}
	for _, want := range []error{gap, io.EOF, io.EOF} {
		if n, err := s.Read(make([]float64, 3)); n != 0 || err != want {
			t.Errorf("Read = %d, %v; want 0, %v", n, err, want)
		}
	}
}

func TestTeeAllocatesNothing(t *testing.T) {
	const channels = 8
	file := &stub{forget: true}
	r := on(file, channels, queueFrames(testRateHz, channels))
	defer r.Close()
	s := Tee(&endless{channels: channels, gap: &acquire.GapError{Frames: 3}}, r)
	dst := make([]float64, 20*channels)
	if n := testing.AllocsPerRun(2000, func() { s.Read(dst) }); n != 0 {
		t.Errorf("%v allocations a Read, want none", n)
	}
}

// An endless source gives zeros, and a gap at every fourth Read.
type endless struct {
	channels int
	reads    int
	gap      error
}

func (e *endless) RateHz() float64 { return testRateHz }
func (e *endless) Channels() int   { return e.channels }
func (e *endless) Read(dst []float64) (int, error) {
	if e.reads++; e.gap != nil && e.reads%4 == 0 {
		return 0, e.gap
	}
	clear(dst)
	return len(dst) / e.channels, nil
}

func TestTeePanicsOnShape(t *testing.T) {
	r := on(&stub{}, 2, 100)
	defer r.Close()
	for name, source := range map[string]acquire.Source{
		"channels": &list{channels: 3},
		"rate":     &faster{list{channels: 2}},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if text, ok := recover().(string); !ok || !strings.HasPrefix(text, "record: ") {
					t.Errorf("recovered %q, want a panic of this package", text)
				}
			}()
			Tee(source, r)
		})
	}
}

type faster struct{ list }

func (*faster) RateHz() float64 { return testRateHz + 1 }

// A gap of more than a day at once ends the recording after what came before; a day does not.
func TestAbsurdGap(t *testing.T) {
	const day = 24 * 60 * 60 * testRateHz
	for _, c := range []struct {
		name string
		gap  int64
		want string
	}{
		{"a day", day, ""},
		{"more", day + 1, "run.wav: recording ended: 86400001 frames lost at once are more than a day: check the source's clock and start another recording"},
		{"as large as can be", math.MaxInt64, "run.wav: recording ended: 9223372036854775807 frames lost at once are more than a day: check the source's clock and start another recording"},
	} {
		t.Run(c.name, func(t *testing.T) {
			file := &stub{forget: true}
			var reported []error
			r := onWith(file, 1, 1000, func(err error) { reported = append(reported, err) })
			s := Tee(&list{channels: 1, end: io.EOF, parts: []any{
				counting(1, 0, 200), &acquire.GapError{Frames: c.gap}, counting(1, 0, 100)}}, r)
			sourcetest.Drain(t, s, 200)
			err := r.Close()
			if c.want == "" {
				if err != nil || file.count != day+300 || r.Counts().Dropped != 0 {
					t.Errorf("%v, %d samples, %+v", err, file.count, r.Counts())
				}
				return
			}
			if err == nil || err.Error() != c.want || file.count != 200 || file.closed != 1 {
				t.Errorf("%v after %d samples, closed %d times; want\n%s after 200", err, file.count, file.closed, c.want)
			}
			if len(reported) != 1 || !errors.Is(reported[0], err) || r.Counts().Dropped != 100 {
				t.Errorf("reported %v, %+v", reported, r.Counts())
			}
		})
	}
}
