package spectra

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestListedCutsWhereTold(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const channels = 3
		block := rapid.IntRange(1, 20).Draw(t, "block")
		var starts []int64 // that overlap or not
		at := int64(-1)
		for _, step := range rapid.SliceOfN(rapid.Int64Range(1, 50), 0, 8).Draw(t, "steps") {
			at += step
			starts = append(starts, at)
		}
		stream := make([]float64, channels*200)
		for i := range stream {
			stream[i] = float64(i)
		}
		c := NewListed(channels, block, slices.Clone(starts))
		var found []int64
		dst := make([]float64, channels*block)
		for rest := stream; len(rest) > 0; {
			piece := min(len(rest), channels*rapid.IntRange(1, 40).Draw(t, "frames"))
			taken := c.Put(rest[:piece], false)
			rest = rest[taken:]
			for c.Full() {
				if int(c.Index()) != len(found) || c.Filled() != 1 {
					t.Fatalf("block %d, %v of it, after %d others", c.Index(), c.Filled(), len(found))
				}
				found = append(found, c.Start())
				c.CopyTo(dst)
				for ch := range channels {
					for i := range block {
						if want := stream[(int(c.Start())+i)*channels+ch]; dst[ch*block+i] != want {
							t.Fatalf("sample %d of channel %d is %v, want %v", i, ch, dst[ch*block+i], want)
						}
					}
				}
				c.Advance()
			}
		}
		whole := slices.DeleteFunc(starts, func(s int64) bool { return s+int64(block) > 200 })
		if !slices.Equal(found, whole) {
			t.Fatalf("blocks at %v, want %v", found, whole)
		}
	})
}

func TestListedRefusesDisorder(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("starts that do not grow are taken")
		}
	}()
	NewListed(1, 10, []int64{9, 9})
}
