package wav

import (
	"encoding/binary"
	"fmt"
	"io"
)

// sizes64 is what a ds64 chunk says; nil when there is none.
type sizes64 struct {
	data  uint64
	table []chunkSize
}

type chunkSize struct {
	name  string
	bytes uint64
}

const (
	ds64Bytes      = 28 // body of a ds64 chunk with an empty table
	ds64EntryBytes = 12

	// maxDS64Entries bounds what a header can make us hold. An entry is needed for each chunk beyond
	// 4 GiB other than data, so real tables are empty or nearly so (own choice, no source).
	maxDS64Entries = 256
)

// readDS64 reads the body of a ds64 chunk, bytes long, at pos. The body lies inside the file.
func readDS64(r io.ReaderAt, pos int64, bytes uint64) (*sizes64, error) {
	if bytes < ds64Bytes {
		return nil, fmt.Errorf("ds64 chunk of %d bytes where %d are needed: %s", bytes, ds64Bytes, copyAgain)
	}
	var b [ds64Bytes]byte
	if _, err := readFull(r, b[:], pos); err != nil {
		return nil, headerError(pos, err)
	}
	le := binary.LittleEndian
	s := &sizes64{data: le.Uint64(b[8:])}
	entries := uint64(le.Uint32(b[24:]))
	if entries > maxDS64Entries || entries > (bytes-ds64Bytes)/ds64EntryBytes {
		return nil, fmt.Errorf("ds64 chunk of %d bytes with a table of %d entries: %s", bytes, entries, copyAgain)
	}
	table := make([]byte, entries*ds64EntryBytes)
	if _, err := readFull(r, table, pos+ds64Bytes); err != nil {
		return nil, headerError(pos, err)
	}
	for ; len(table) > 0; table = table[ds64EntryBytes:] {
		s.table = append(s.table, chunkSize{string(table[:4]), le.Uint64(table[4:])})
	}
	return s, nil
}

// chunk is the size of a chunk whose 32-bit size is given.
func (s *sizes64) chunk(name string, size32 uint32) uint64 {
	if s != nil && size32 == unknown32 {
		for _, c := range s.table {
			if c.name == name {
				return c.bytes
			}
		}
	}
	return uint64(size32)
}

// dataChunk is the size of the data chunk whose 32-bit size is given; known is false when neither
// says how much there is.
func (s *sizes64) dataChunk(size32 uint32) (bytes uint64, known bool) {
	switch {
	case size32 != 0 && size32 != unknown32:
		return uint64(size32), true
	case s == nil || s.data == 0 || s.data == unknown64:
		return 0, false
	}
	return s.data, true
}
