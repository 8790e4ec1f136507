package acquire_test

import (
	"errors"
	"io"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
)

// A list is a source of frames and losses in a given order, for tests.
type list struct {
	channels int
	parts    []any // []float64 or *acquire.GapError
	end      error
}

func (l *list) RateHz() float64 { return 100 }
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
	case *acquire.GapError:
		l.parts = l.parts[1:]
		return 0, part
	}
	panic("acquire_test: unknown part")
}

func TestSelectionPicksChannelsInOrder(t *testing.T) {
	s := acquire.Select(&list{channels: 3, end: io.EOF, parts: []any{
		[]float64{1, 2, 3, 4, 5, 6},
		&acquire.GapError{Frames: 5},
		[]float64{7, 8, 9},
	}}, []int{2, 0})
	got, err := sourcetest.Drain(t, s, 4)
	if err != io.EOF {
		t.Fatalf("ended by %v", err)
	}
	want := []sourcetest.Stretch{{Samples: []float64{3, 1, 6, 4}}, {Lost: 5}, {Samples: []float64{9, 7}}}
	if !slices.EqualFunc(got, want, sameStretch) {
		t.Errorf("read %v, want %v", got, want)
	}
}

func sameStretch(a, b sourcetest.Stretch) bool {
	return a.Lost == b.Lost && slices.Equal(a.Samples, b.Samples)
}

// TestSelectionLosesFramesThatAreNotFinite puts values that are no numbers anywhere and compares
// with the rule as it is written.
func TestSelectionLosesFramesThatAreNotFinite(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		const channels = 3
		values := rapid.SliceOfN(rapid.SampledFrom([]float64{0, 1, -1, 1e300, math.NaN(), math.Inf(1), math.Inf(-1)}), 0, 120).Draw(rt, "values")
		values = values[:len(values)/channels*channels]
		used := []int{1, 0}
		var want []sourcetest.Stretch
		for at := 0; at < len(values); at += channels {
			x, y := values[at+1], values[at]
			bad := math.IsNaN(x) || math.IsInf(x, 0) || math.IsNaN(y) || math.IsInf(y, 0)
			if n := len(want); n == 0 || (want[n-1].Lost > 0) != bad {
				want = append(want, sourcetest.Stretch{})
			}
			last := &want[len(want)-1]
			if bad {
				last.Lost++
			} else {
				last.Samples = append(last.Samples, x, y)
			}
		}
		source := &list{channels: channels, parts: []any{slices.Clone(values)}, end: io.EOF}
		if len(values) == 0 {
			source.parts = nil
		}
		got, _ := sourcetest.Drain(t, acquire.Select(source, used), 7)
		if !slices.EqualFunc(got, want, sameStretch) {
			rt.Fatalf("read %v, want %v", got, want)
		}
	})
}

func TestSelectionEndsAsItsSource(t *testing.T) {
	broken := errors.New("cable pulled")
	s := acquire.Select(&list{channels: 1, parts: []any{[]float64{1, 2}}, end: broken}, []int{0})
	if _, err := sourcetest.Drain(t, s, 3); !errors.Is(err, broken) {
		t.Errorf("ended by %v, want the source's error", err)
	}
}

func TestSelectionAllocatesNothing(t *testing.T) {
	source := &endless{}
	s := acquire.Select(source, []int{3, 1})
	dst := make([]float64, 2*512)
	if allocs := testing.AllocsPerRun(50, func() { s.Read(dst) }); allocs != 0 {
		t.Errorf("%v allocations a Read, want none", allocs)
	}
}

// An endless source gives zeros.
type endless struct{}

func (endless) RateHz() float64 { return 100 }
func (endless) Channels() int   { return 4 }
func (endless) Read(dst []float64) (int, error) {
	clear(dst)
	return len(dst) / 4, nil
}

func TestSelectionRefusesChannelsThatAreNotThere(t *testing.T) {
	for _, channels := range [][]int{{4}, {-1}, {}} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("channels %v of 4 did not panic", channels)
				}
			}()
			acquire.Select(endless{}, channels)
		}()
	}
}
