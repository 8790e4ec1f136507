package wav

import (
	"bytes"
	"errors"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

const (
	export = ": export it again as WAV with PCM 16, 24 or 32 bit or IEEE float 32 or 64 bit"
	repeat = ": the file is damaged or was cut short, copy or export it again"
)

// Every message in full, since a user acts on it.
func TestUnusable(t *testing.T) {
	s16, data := plain(1, 2, 16), chunk("data", make([]byte, 8))
	otherGUID := extensible(1, 2, 16, 16)
	otherGUID[len(otherGUID)-1] = 0
	for _, c := range []struct {
		name    string
		content []byte
		want    string
	}{
		{"empty file", nil, "empty file: copy it again, or record again"},
		{"text", []byte("time,volts\n0,1\n"), `not a WAV file, it begins with "time": give a recording that begins with RIFF, RF64 or BW64`},
		{"three bytes", []byte("RIF"), `not a WAV file, it begins with "RIF": give a recording that begins with RIFF, RF64 or BW64`},
		{"control characters", []byte("\x00\n\xff\x1b...."), `not a WAV file, it begins with "\x00\n\xff\x1b": give a recording that begins with RIFF, RF64 or BW64`},
		{"big endian", []byte("RIFX\x00\x00\x00\x20WAVE"), "big-endian WAV file (RIFX)" + export},
		{"another RIFF form", sized("RIFF", 4, []byte("AVI ")), `not a WAV file, its form is "AVI " where WAVE is needed: give a WAV recording`},
		{"ends in the form", []byte("RIFF\x00\x00\x00\x00W"), "the file ends after 9 bytes" + repeat},
		{"form only", form("RIFF"), "no data chunk" + repeat},
		{"ends in a chunk's size", form("RIFF", s16, []byte("data\x08")), "no data chunk" + repeat},
		{"no data chunk", form("RIFF", s16, chunk("LIST", []byte("INFO"))), "no data chunk" + repeat},
		{"ends in fmt", form("RIFF", s16[:20]), `chunk "fmt " at byte 12 of 16 bytes, 12 are left of the file` + repeat},
		{"skipped chunk beyond the end", form("RIFF", sized("LIST", 1<<31, []byte("INFO"))), `chunk "LIST" at byte 12 of 2147483648 bytes, 4 are left of the file` + repeat},
		{"huge chunk by ds64", form("RF64", ds64(8, 1, entry("bext", 1<<63+7)), sized("bext", 0xFFFFFFFF)),
			`chunk "bext" at byte 60 of 9223372036854775815 bytes, 0 are left of the file` + repeat},
		{"zeros", sized("RIFF", 0, []byte("WAVE"), make([]byte, 1<<20)), "no data chunk" + repeat},
		{"more chunks than any recording has", form("RIFF", bytes.Repeat(chunk("junk"), maxChunks), s16, data), "no data chunk" + repeat},
		{"data before fmt", form("RIFF", data, s16), "data chunk at byte 12 before any fmt chunk" + repeat},
		{"short fmt", form("RIFF", chunk("fmt ", s16[8:22]), data), "fmt chunk of 14 bytes where 16 are needed" + repeat},
		{"short extensible fmt", form("RIFF", chunk("fmt ", fields(0xFFFE, 2, 48000, 4, 16), u16(0)), data), "extensible fmt chunk of 18 bytes where 40 are needed" + repeat},
		{"PCM 8 bit", form("RIFF", plain(1, 2, 8), data), "encoding 0x0001 with 8 bits is not read" + export},
		{"PCM 20 bit", form("RIFF", plain(1, 2, 20), data), "encoding 0x0001 with 20 bits is not read" + export},
		{"PCM 64 bit", form("RIFF", plain(1, 2, 64), data), "encoding 0x0001 with 64 bits is not read" + export},
		{"float 16 bit", form("RIFF", plain(3, 2, 16), data), "encoding 0x0003 with 16 bits is not read" + export},
		{"A-law", form("RIFF", plain(6, 2, 8), data), "encoding 0x0006 with 8 bits is not read" + export},
		{"0 bits", form("RIFF", plain(1, 2, 0), data), "encoding 0x0001 with 0 bits is not read" + export},
		{"extensible A-law", form("RIFF", extensible(6, 2, 8, 8), data), "encoding 0x0006 with 8 bits is not read" + export},
		{"extensible within extensible", form("RIFF", extensible(0xFFFE, 2, 16, 16), data), "encoding 0xfffe with 16 bits is not read" + export},
		{"another subformat", form("RIFF", otherGUID, data), "encoding of subformat 0100000000001000800000aa00389b00 is not read" + export},
		{"0 channels", form("RIFF", plain(1, 0, 16), data), "0 channels" + repeat},
		{"0 frames per second", form("RIFF", chunk("fmt ", fields(1, 2, 0, 4, 16)), data), "0 frames per second" + repeat},
		{"block align too large", form("RIFF", chunk("fmt ", fields(1, 2, 48000, 8, 16)), data), "block align of 8 bytes contradicts 2 channels of 16 bits, which need 4" + repeat},
		{"block align 0", form("RIFF", chunk("fmt ", fields(3, 1, 48000, 0, 64)), data), "block align of 0 bytes contradicts 1 channels of 64 bits, which need 8" + repeat},
		{"more channels than block align can say", form("RIFF", chunk("fmt ", fields(1, 32768, 48000, 0, 16)), data),
			"block align of 0 bytes contradicts 32768 channels of 16 bits, which need 65536" + repeat},
		{"more valid bits than the container", form("RIFF", extensible(1, 2, 16, 24), data), "24 valid bits in a container of 16" + repeat},
		{"short ds64", form("RF64", chunk("ds64", make([]byte, 24)), s16, data), "ds64 chunk of 24 bytes where 28 are needed" + repeat},
		{"ds64 table beyond its chunk", form("RF64", ds64(8, 2, entry("bext", 1)), s16, data), "ds64 chunk of 40 bytes with a table of 2 entries" + repeat},
		{"ds64 table of all ones", form("RF64", ds64(8, 0xFFFFFFFF), s16, data), "ds64 chunk of 28 bytes with a table of 4294967295 entries" + repeat},
		{"ds64 table too long", form("RF64", ds64(8, 257, bytes.Repeat(entry("bext", 1), 257)), s16, data), "ds64 chunk of 3112 bytes with a table of 257 entries" + repeat},
		{"no frames", form("RIFF", s16, chunk("data")), "no frames, the data chunk holds 0 bytes and a frame has 4: record again"},
		{"less than a frame", form("RIFF", s16, chunk("data", make([]byte, 3))), "no frames, the data chunk holds 3 bytes and a frame has 4: record again"},
		{"less than a frame of more", form("RIFF", s16, sized("data", 1000, make([]byte, 3))), "no frames, the data chunk holds 3 bytes and a frame has 4: record again"},
		{"killed within the first frame", form("RIFF", s16, sized("data", 0xFFFFFFFF, make([]byte, 3))), "no frames, the data chunk holds 3 bytes and a frame has 4: record again"},
		{"no frames, then a chunk", form("RIFF", s16, chunk("data"), chunk("LIST", []byte("INFOINAM\x02\x00\x00\x00x\x00"))),
			"no frames, the data chunk holds 0 bytes and a frame has 4: record again"},
		{"no frames, then two chunks", form("RIFF", s16, chunk("data"), chunk("note", []byte("abc")), chunk("LIST", []byte("INFO"))),
			"no frames, the data chunk holds 0 bytes and a frame has 4: record again"},
		{"no frames, then a chunk without its pad byte", form("RIFF", s16, chunk("data"), sized("note", 3, []byte("abc"))),
			"no frames, the data chunk holds 0 bytes and a frame has 4: record again"},
		{"no frames by ds64, then a chunk", form("RF64", ds64(0, 0), s16, sized("data", 0xFFFFFFFF), chunk("LIST", []byte("INFO"))),
			"no frames, the data chunk holds 0 bytes and a frame has 4: record again"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := read(c.content)
			if err == nil {
				t.Fatalf("no error, want %s", c.want)
			}
			if err.Error() != "run.wav: "+c.want {
				t.Errorf("error is\n%v\nwant\nrun.wav: %s", err, c.want)
			}
		})
	}
}

// A whole file cut at every byte is an error or a recording, never a panic.
func TestTruncatedEverywhere(t *testing.T) {
	raw, _ := pattern(PCM24, 12)
	whole := form("RF64", ds64(36, 1, entry("bext", 3)), chunk("odd ", []byte("abc")), sized("bext", 0xFFFFFFFF, []byte("abc\x00")),
		extensible(1, 2, 24, 24), sized("data", 0xFFFFFFFF, raw))
	firstFrame := len(whole) - len(raw) + 6
	for n := range whole {
		r, err := read(whole[:n])
		if (err == nil) != (n >= firstFrame) {
			t.Errorf("cut to %d bytes: error %v, want one below %d bytes only", n, err, firstFrame)
		}
		if err == nil && r.Frames() != int64(n-firstFrame)/6+1 {
			t.Errorf("cut to %d bytes: %d frames, want %d", n, r.Frames(), (n-firstFrame)/6+1)
		}
	}
}

func TestOpenUnusable(t *testing.T) {
	dir := t.TempDir()
	put := func(name, content string, mode os.FileMode) string {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, []byte(content), mode); err != nil {
			t.Fatal(err)
		}
		return path
	}
	for _, c := range []struct{ name, path, want string }{
		{"missing", filepath.Join(dir, "none.wav"), "no such file or directory: check the name and the folder"},
		{"folder", dir, "is a folder: give a recording inside it"},
		{"empty", put("empty.wav", "", 0o600), "empty file: copy it again, or record again"},
		{"below a file", filepath.Join(put("file", "x", 0o600), "run.wav"), "not a directory: check the name and the permissions"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Open(c.path)
			if err == nil || err.Error() != c.path+": "+c.want {
				t.Errorf("error is\n%v\nwant\n%s: %s", err, c.path, c.want)
			}
		})
	}
	if _, err := Open(filepath.Join(dir, "none.wav")); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("a missing file is %v, want os.ErrNotExist inside", err)
	}
	if runtime.GOOS == "linux" {
		if _, err := Open("/dev/null"); err == nil || err.Error() != "/dev/null: is no regular file: give a recording that is a file" {
			t.Errorf("a device is %v", err)
		}
	}
}

// brokenAt fails every read that touches a byte from at on.
type brokenAt struct {
	content string
	at      int64
	err     error
}

func (b brokenAt) ReadAt(p []byte, off int64) (int, error) {
	if off >= b.at {
		return 0, b.err
	}
	n := copy(p, b.content[off:b.at])
	if n < len(p) {
		return n, b.err
	}
	return n, nil
}

var errDisk = errors.New("input/output error")

func TestBrokenHeader(t *testing.T) {
	raw, _ := pattern(PCM16, 4)
	content := string(form("RF64", ds64(8, 1, entry("bext", 3)), extensible(1, 2, 16, 16), sized("data", 0xFFFFFFFF, raw)))
	dataPos := int64(len(content) - len(raw))
	for at := range dataPos {
		_, err := NewReader(brokenAt{content, at, errDisk}, int64(len(content)), "run.wav")
		if !errors.Is(err, errDisk) || !strings.HasPrefix(err.Error(), "run.wav: header at byte ") {
			t.Errorf("broken at byte %d: error %v, want %v in the header", at, err, errDisk)
		}
	}
	// A file that shrinks between being measured and being read.
	_, err := NewReader(brokenAt{content, 20, io.EOF}, int64(len(content)), "run.wav")
	if !errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, io.EOF) {
		t.Errorf("a file that ends early: %v, want %v", err, io.ErrUnexpectedEOF)
	}
}
