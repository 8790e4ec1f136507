package wav

import "io"

// readFull fills b from byte pos of r, whatever pieces r hands out. It returns how much it could
// read; err is nil exactly when that is len(b), and io.ErrUnexpectedEOF when r ends before.
func readFull(r io.ReaderAt, b []byte, pos int64) (n int, err error) {
	for n < len(b) {
		m, err := r.ReadAt(b[n:], pos+int64(n))
		n += m
		switch {
		case n == len(b):
			return n, nil
		case err == io.EOF:
			return n, io.ErrUnexpectedEOF
		case err != nil:
			return n, err
		case m == 0:
			return n, io.ErrNoProgress
		}
	}
	return n, nil
}
