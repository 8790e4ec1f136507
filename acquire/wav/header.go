package wav

import "encoding/binary"

// headerBytes is the length of what appendHeader appends.
func headerBytes(f format) int {
	n := formHeader + chunkHeader + ds64Bytes + chunkHeader + plainFormat + chunkHeader + 4 + chunkHeader
	if f.channels > 2 {
		n += extensibleFormat - plainFormat
	}
	return n
}

// appendHeader appends to b all that stands before the samples of a file that the Writer makes, for
// that many frames:
//
//	offset  bytes    field
//	 0      12       form: RIFF, or RF64 beyond maxRIFF
//	12      36       JUNK, 28 zeros; in RF64 the ds64 chunk, in the same place [4]
//	48      26, 48   fmt; extensible for more than two channels
//	...     12       fact
//	...     8        data
//
// A form larger than maxRIFF bytes becomes RF64.
func appendHeader(b []byte, f format, frames int64, maxRIFF uint64) []byte {
	le := binary.LittleEndian
	data := uint64(frames) * uint64(f.frameBytes())
	riff := uint64(headerBytes(f)) - chunkHeader + data
	long := riff > maxRIFF
	form, reserve, riff32, data32 := "RIFF", "JUNK", uint32(riff), uint32(data)
	if long {
		form, reserve, riff32, data32 = "RF64", "ds64", unknown32, unknown32
	}
	b = le.AppendUint32(append(b, form...), riff32)
	b = append(b, "WAVE"...)

	b = le.AppendUint32(append(b, reserve...), ds64Bytes)
	if long {
		b = le.AppendUint64(b, riff)
		b = le.AppendUint64(b, data)
		b = le.AppendUint64(b, uint64(frames))
		b = le.AppendUint32(b, 0)
	} else {
		b = append(b, make([]byte, ds64Bytes)...)
	}

	formatBytes := plainFormat
	if f.channels > 2 {
		formatBytes = extensibleFormat
	}
	b = le.AppendUint32(append(b, "fmt "...), uint32(formatBytes))
	b = appendFormat(b, f)

	b = le.AppendUint32(append(b, "fact"...), 4)
	b = le.AppendUint32(b, uint32(min(uint64(frames), unknown32)))

	return le.AppendUint32(append(b, "data"...), data32)
}
