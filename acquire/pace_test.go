package acquire_test

import (
	"context"
	"errors"
	"io"
	"testing"
	"testing/synctest"
	"time"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
)

func TestPaceKeepsTime(t *testing.T) {
	for _, test := range []struct {
		factor float64
		want   time.Duration
	}{{1, 6 * time.Second}, {4, 1500 * time.Millisecond}} {
		synctest.Test(t, func(t *testing.T) {
			// 400 frames and 200 lost ones at 100 frames/s are six seconds.
			source := &list{channels: 1, end: io.EOF, parts: []any{
				make([]float64, 300), &acquire.GapError{Frames: 200}, make([]float64, 100)}}
			start := time.Now()
			got, err := sourcetest.Drain(t, acquire.Pace(t.Context(), source, test.factor), 9)
			if err != io.EOF || len(got) != 3 || got[1].Lost != 200 {
				t.Fatalf("read %d stretches, ended by %v", len(got), err)
			}
			if took := time.Since(start); took != test.want {
				t.Errorf("at %v times real time it took %v, want %v", test.factor, took, test.want)
			}
		})
	}
}

func TestPaceDoesNotHurryAhead(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		p := acquire.Pace(t.Context(), endless{}, 1)
		start := time.Now()
		p.Read(make([]float64, 4*50))
		if took := time.Since(start); took != 500*time.Millisecond {
			t.Errorf("50 frames of 100 a second came after %v, want 500ms", took)
		}
	})
}

func TestPaceEndsWithItsContext(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		ctx, cancel := context.WithTimeout(t.Context(), time.Second)
		defer cancel()
		p := acquire.Pace(ctx, endless{}, 1)
		start := time.Now()
		n, err := p.Read(make([]float64, 4*10_000))
		if n != 0 || !errors.Is(err, context.DeadlineExceeded) || time.Since(start) != time.Second {
			t.Errorf("Read = %d, %v after %v: want the context's error after 1s", n, err, time.Since(start))
		}
		if _, again := p.Read(make([]float64, 4)); !errors.Is(again, context.DeadlineExceeded) {
			t.Errorf("the next Read says %v", again)
		}
	})
}
