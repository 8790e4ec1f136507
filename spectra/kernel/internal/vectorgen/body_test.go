package main

import "testing"

func TestRegistersAreUsedAgain(t *testing.T) {
	b := &body{}
	x := b.load("(AX)")
	for range 40 {
		x = b.sum(x, "(BX)")
	}
	b.store(x, "(AX)")
	f := &file{}
	b.write(f) // panics when it gives none back
}

func TestValuesKeepTheirRegister(t *testing.T) {
	b := &body{}
	x := b.load("(AX)")
	b.store(b.sum(x, b.load("(BX)")), "(CX)")
	b.store(x, "(DX)")
	f := &file{}
	b.write(f)
	const want = "\tVMOVUPD (AX), Y0\n\tVMOVUPD (BX), Y1\n\tVADDPD Y1, Y0, Y2\n\tVMOVUPD Y2, (CX)\n\tVMOVUPD Y0, (DX)\n"
	if f.String() != want {
		t.Errorf("got\n%swant\n%s", f, want)
	}
}

func TestTooManyValues(t *testing.T) {
	b := &body{}
	sum := b.load("(AX)")
	var values []value
	for range 16 {
		values = append(values, b.load("(AX)"))
	}
	for _, v := range values {
		sum = b.sum(sum, v)
	}
	defer func() {
		if recover() == nil {
			t.Error("seventeen values in sixteen registers")
		}
	}()
	b.write(&file{})
}
