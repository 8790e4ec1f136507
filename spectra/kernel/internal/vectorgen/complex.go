package main

import "fmt"

// A cvalue is a complex value of four channels. In memory the real parts stand before the imaginary
// ones, elementBytes together.
type cvalue struct{ re, im value }

const elementBytes = 64

// An address is where an element stands: an offset in bytes from registers, "(DI)" or "(DI)(R8*2)".
type address struct {
	offset    int
	registers string
}

func (a address) String() string {
	if a.offset == 0 {
		return a.registers
	}
	return fmt.Sprint(a.offset, a.registers)
}

func (a address) plus(bytes int) address { return address{a.offset + bytes, a.registers} }

func (a address) re() string { return a.String() }

func (a address) im() string { return a.plus(elementBytes / 2).String() }

func (b *body) cload(a address) cvalue { return cvalue{b.load(a.re()), b.load(a.im())} }

func (b *body) cstore(v cvalue, a address) {
	b.store(v.re, a.re())
	b.store(v.im, a.im())
}

func (b *body) csum(x, y cvalue) cvalue { return cvalue{b.sum(x.re, y.re), b.sum(x.im, y.im)} }

func (b *body) cdifference(x, y cvalue) cvalue {
	return cvalue{b.difference(x.re, y.re), b.difference(x.im, y.im)}
}

// csumMinusI is x - i·y.
func (b *body) csumMinusI(x, y cvalue) cvalue {
	return cvalue{b.sum(x.re, y.im), b.difference(x.im, y.re)}
}

// csumPlusI is x + i·y.
func (b *body) csumPlusI(x, y cvalue) cvalue {
	return cvalue{b.difference(x.re, y.im), b.sum(x.im, y.re)}
}

// cscaled is x times a real factor, a value or an address.
func (b *body) cscaled(x cvalue, by any) cvalue {
	return cvalue{b.product(x.re, by), b.product(x.im, by)}
}

// cturned is x times the complex factor whose two parts stand at an address.
func (b *body) cturned(x cvalue, factor address) cvalue {
	wr := b.broadcast(factor.String())
	rr, ir := b.product(x.re, wr), b.product(x.im, wr)
	wi := b.broadcast(factor.plus(8).String())
	ri, ii := b.product(x.re, wi), b.product(x.im, wi)
	return cvalue{b.difference(rr, ii), b.sum(ri, ir)}
}
