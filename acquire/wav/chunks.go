package wav

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
)

// A header is what stands before the samples.
type header struct {
	format    format
	dataPos   int64  // of the first sample in the file
	dataBytes uint64 // of the data chunk as the header says
	dataKnown bool   // false: the header does not say, dataBytes is 0
}

// maxChunks bounds the search for the data chunk in a file of zeros, every 8 bytes of which are an
// empty chunk. Real files have a dozen (own choice, no source).
const maxChunks = 1 << 16

// readHeader walks over the chunks up to the samples. size is that of the file.
func readHeader(r io.ReaderAt, size int64) (header, error) {
	if err := checkForm(r, size); err != nil {
		return header{}, err
	}
	var (
		h        header
		sizes    *sizes64
		seenType bool
	)
	pos := int64(formHeader)
	for n := 0; n < maxChunks && size-pos >= chunkHeader; n++ {
		name, size32, err := readChunk(r, pos)
		if err != nil {
			return header{}, err
		}
		body, left := pos+chunkHeader, size-pos-chunkHeader
		if name == "data" {
			if !seenType {
				return header{}, fmt.Errorf("data chunk at byte %d before any fmt chunk: %s", pos, copyAgain)
			}
			h.dataPos = body
			h.dataBytes, h.dataKnown = sizes.dataChunk(size32)
			return h, nil
		}
		bytes := sizes.chunk(name, size32)
		if bytes > uint64(left) {
			return header{}, fmt.Errorf("chunk %q at byte %d of %d bytes, %d are left of the file: %s", name, pos, bytes, left, copyAgain)
		}
		switch {
		case name == "ds64":
			sizes, err = readDS64(r, body, bytes)
		case name == "fmt " && !seenType:
			h.format, err = readFormat(r, body, bytes)
			seenType = true
		}
		if err != nil {
			return header{}, err
		}
		pos = body + int64(bytes) + int64(bytes&1)
	}
	return header{}, fmt.Errorf("no data chunk: %s", copyAgain)
}

// checkForm looks at the first bytes of a file.
func checkForm(r io.ReaderAt, size int64) error {
	if size <= 0 {
		return errors.New("empty file: copy it again, or record again")
	}
	var b [formHeader]byte
	n, err := readFull(r, b[:min(size, formHeader)], 0)
	if err != nil {
		return headerError(0, err)
	}
	switch form := string(b[:min(n, 4)]); {
	case form == "RIFX" || form == "FFIR":
		return fmt.Errorf("big-endian WAV file (%s): %s", form, exportAgain)
	case form != "RIFF" && form != "RF64" && form != "BW64":
		return fmt.Errorf("not a WAV file, it begins with %q: give a recording that begins with RIFF, RF64 or BW64", form)
	case n < formHeader:
		return fmt.Errorf("the file ends after %d bytes: %s", n, copyAgain)
	case string(b[8:12]) != "WAVE":
		return fmt.Errorf("not a WAV file, its form is %q where WAVE is needed: give a WAV recording", b[8:12])
	}
	return nil
}

// readChunk reads the name and the 32-bit size of the chunk at pos.
func readChunk(r io.ReaderAt, pos int64) (name string, size32 uint32, err error) {
	var b [chunkHeader]byte
	if _, err := readFull(r, b[:], pos); err != nil {
		return "", 0, headerError(pos, err)
	}
	return string(b[:4]), binary.LittleEndian.Uint32(b[4:]), nil
}

// readFormat reads the fmt chunk whose body, bytes long, is at pos. The body lies inside the file.
func readFormat(r io.ReaderAt, pos int64, bytes uint64) (format, error) {
	var b [extensibleFormat]byte
	n, err := readFull(r, b[:min(bytes, extensibleFormat)], pos)
	if err != nil {
		return format{}, headerError(pos, err)
	}
	return parseFormat(b[:n])
}

// onlyChunks says whether whole chunks, one at least, with printable names, lie from pos to the end
// of the file. Samples practically never look like that.
func onlyChunks(r io.ReaderAt, pos, size int64) (bool, error) {
	if size-pos < chunkHeader {
		return false, nil
	}
	for n := 0; n < maxChunks && size-pos >= chunkHeader; n++ {
		name, size32, err := readChunk(r, pos)
		if err != nil {
			return false, err
		}
		for _, c := range []byte(name) {
			if c < ' ' || c > '~' {
				return false, nil
			}
		}
		pos += chunkHeader + int64(size32)
		if pos < size { // a pad byte missing at the end of the file is a common mistake
			pos += int64(size32 & 1)
		}
	}
	return pos == size, nil
}

// headerError says that the header could not be read at pos.
func headerError(pos int64, err error) error {
	return fmt.Errorf("header at byte %d: %w: check the disk it lies on, or copy it again", pos, err)
}
