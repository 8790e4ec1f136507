package kernel

import (
	"fmt"
	"syscall"
	"testing"
	"unsafe"
)

// atTheEnd is room for n values behind which no memory may be read.
func atTheEnd[T any](t *testing.T, n int) []T {
	page := syscall.Getpagesize()
	pages, err := syscall.Mmap(-1, 0, 2*page, syscall.PROT_READ|syscall.PROT_WRITE, syscall.MAP_ANON|syscall.MAP_PRIVATE)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := syscall.Munmap(pages); err != nil {
			t.Error(err)
		}
	})
	if err := syscall.Mprotect(pages[page:], syscall.PROT_NONE); err != nil {
		t.Fatal(err)
	}
	size := int(unsafe.Sizeof(*new(T)))
	return unsafe.Slice((*T)(unsafe.Pointer(&pages[page-n*size])), n)
}

// TestMisfitsReadNoFurther than their channels go, though the last group of rows is no whole one: whoever does ends the test
// program with a fault.
func TestMisfitsReadNoFurther(t *testing.T) {
	needVector(t)
	for q := 1; q < 4; q++ {
		for p := 1; p < 9; p++ {
			t.Run(fmt.Sprintf("%dx%d", q, p), func(t *testing.T) {
				m, weights := anyMatrices(q, p)
				end := atTheEnd[float32](t, len(weights))
				copy(end, weights)
				values := atTheEnd[float32](t, m.size())
				copy(values, m.values)
				fastest.misfit(atTheEnd[float64](t, len(weights)), atTheEnd[complex128](t, p), atTheEnd[complex128](t, q), values, end, 1, 1)
				fastest.logarithms(atTheEnd[float64](t, p))
			})
		}
	}
}
