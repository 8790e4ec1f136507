package wav

import (
	"encoding/binary"
	"fmt"
)

// A format is what a fmt chunk says.
type format struct {
	encoding  Encoding
	channels  int
	rateHz    uint32
	validBits int // of an integer sample, at most 8*encoding.Bytes()
}

func (f format) frameBytes() int { return f.channels * f.encoding.Bytes() }

const (
	shortFormat      = 16 // bytes of a fmt chunk without extension
	plainFormat      = 18 // with an empty one
	extensibleFormat = 40
)

// parseFormat reads the body of a fmt chunk, of which b holds the first extensibleFormat bytes or
// all there are.
func parseFormat(b []byte) (format, error) {
	if len(b) < shortFormat {
		return format{}, fmt.Errorf("fmt chunk of %d bytes where %d are needed: %s", len(b), shortFormat, copyAgain)
	}
	le := binary.LittleEndian
	tag, bits := le.Uint16(b), int(le.Uint16(b[14:]))
	f := format{channels: int(le.Uint16(b[2:])), rateHz: le.Uint32(b[4:]), validBits: bits}
	if tag == tagExtensible {
		if len(b) < extensibleFormat {
			return format{}, fmt.Errorf("extensible fmt chunk of %d bytes where %d are needed: %s", len(b), extensibleFormat, copyAgain)
		}
		if string(b[26:40]) != subformatTail {
			return format{}, fmt.Errorf("encoding of subformat %x is not read: %s", b[24:40], exportAgain)
		}
		tag = le.Uint16(b[24:])
		if valid := int(le.Uint16(b[18:])); valid != 0 { // some writers leave it 0
			f.validBits = valid
		}
	}
	if f.encoding = encodingOf(tag, bits); f.encoding == 0 {
		return format{}, fmt.Errorf("encoding %#04x with %d bits is not read: %s", tag, bits, exportAgain)
	}
	return f, f.check(int(le.Uint16(b[12:])))
}

// encodingOf is 0 for an encoding that is not read.
func encodingOf(tag uint16, bits int) Encoding {
	for _, e := range []Encoding{PCM16, PCM24, PCM32, Float32, Float64} {
		if e.tag() == tag && 8*e.Bytes() == bits {
			return e
		}
	}
	return 0
}

func (e Encoding) tag() uint16 {
	if e.isFloat() {
		return tagFloat
	}
	return tagPCM
}

// check finds contradictions within the format and with the block align of the same chunk.
func (f format) check(blockAlign int) error {
	bits := 8 * f.encoding.Bytes()
	switch {
	case f.channels == 0:
		return fmt.Errorf("0 channels: %s", copyAgain)
	case f.rateHz == 0:
		return fmt.Errorf("0 frames per second: %s", copyAgain)
	case blockAlign != f.frameBytes():
		return fmt.Errorf("block align of %d bytes contradicts %d channels of %d bits, which need %d: %s",
			blockAlign, f.channels, bits, f.frameBytes(), copyAgain)
	case f.validBits > bits:
		return fmt.Errorf("%d valid bits in a container of %d: %s", f.validBits, bits, copyAgain)
	}
	return nil
}

// appendFormat appends the body of the fmt chunk to b.
//
// More than two channels call for the extensible form [3]. Its channel mask is 0: no channel belongs
// to a loudspeaker, and a mask would make a player move or mix measured channels.
func appendFormat(b []byte, f format) []byte {
	le := binary.LittleEndian
	tag, bits := f.encoding.tag(), uint16(8*f.encoding.Bytes())
	extensible := f.channels > 2
	if extensible {
		tag = tagExtensible
	}
	b = le.AppendUint16(b, tag)
	b = le.AppendUint16(b, uint16(f.channels))
	b = le.AppendUint32(b, f.rateHz)
	b = le.AppendUint32(b, f.rateHz*uint32(f.frameBytes()))
	b = le.AppendUint16(b, uint16(f.frameBytes()))
	b = le.AppendUint16(b, bits)
	if !extensible {
		return le.AppendUint16(b, 0)
	}
	b = le.AppendUint16(b, extensibleFormat-plainFormat)
	b = le.AppendUint16(b, bits)
	b = le.AppendUint32(b, 0)
	b = le.AppendUint16(b, f.encoding.tag())
	return append(b, subformatTail...)
}
