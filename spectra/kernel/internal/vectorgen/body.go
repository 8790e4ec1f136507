package main

import (
	"fmt"
	"strings"
)

// A value is what one instruction leaves in a vector register. It is written once.
type value int

// An instruction has its operands in the assembler's order, the result last. They are values or
// text: addresses and immediate numbers.
type instruction struct {
	name     string
	operands []any
	result   bool // the last operand is a value that is written
}

// A body is straight-line code, most often the inside of a loop. Registers are given to its values
// when it is written out: each is free again after its value was read for the last time.
type body struct {
	instructions []instruction
	values       int
}

// do adds an instruction with a result.
func (b *body) do(name string, operands ...any) value {
	b.values++
	v := value(b.values)
	b.instructions = append(b.instructions, instruction{name, append(operands, v), true})
	return v
}

// store adds an instruction that moves a value into memory.
func (b *body) store(v value, to string) {
	b.instructions = append(b.instructions, instruction{"VMOVUPD", []any{v, to}, false})
}

func (b *body) load(from string) value      { return b.do("VMOVUPD", from) }
func (b *body) broadcast(from string) value { return b.do("VBROADCASTSD", from) }

// The last operand of sum, difference and product may be an address.
func (b *body) sum(x value, y any) value        { return b.do("VADDPD", y, x) }
func (b *body) difference(x value, y any) value { return b.do("VSUBPD", y, x) }
func (b *body) product(x value, y any) value    { return b.do("VMULPD", y, x) }

// write puts the code into f. It panics when the registers do not suffice.
func (b *body) write(f *file) {
	lastRead := map[value]int{}
	for n, i := range b.instructions {
		for _, operand := range i.operands {
			if v, ok := operand.(value); ok {
				lastRead[v] = n
			}
		}
	}
	free := newRegisters()
	where := map[value]string{}
	for n, i := range b.instructions {
		words := make([]string, len(i.operands))
		for k, operand := range i.operands {
			v, ok := operand.(value)
			switch {
			case !ok:
				words[k] = operand.(string)
				continue
			case i.result && k == len(i.operands)-1:
				where[v] = free.take()
			}
			words[k] = where[v]
			if lastRead[v] == n {
				free.giveBack(where[v])
			}
		}
		f.code(i.name + " " + strings.Join(words, ", "))
	}
}

// registers are those that are free. The one that was free longest is taken first.
type registers []string

func newRegisters() registers {
	var free registers
	for n := range 16 {
		free = append(free, fmt.Sprintf("Y%d", n))
	}
	return free
}

func (r *registers) take() string {
	if len(*r) == 0 {
		panic("vectorgen: out of registers")
	}
	name := (*r)[0]
	*r = (*r)[1:]
	return name
}

func (r *registers) giveBack(name string) {
	for _, free := range *r {
		if free == name {
			return // an operand that stands twice
		}
	}
	*r = append(*r, name)
}
