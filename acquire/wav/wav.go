// Package wav holds the reader and the writer of recordings: WAV files, and their 64-bit forms RF64
// and BW64.
//
// It knows bytes, samples and channels. It may not know which channel carries what, nor what becomes
// of the samples.
//
// # Sources
//
//	[1] IBM and Microsoft, Multimedia Programming Interface and Data Specifications 1.0, 1991 (RIFF, WAVE, fmt, data)
//	[2] Microsoft, New Multimedia Data Types and Data Techniques, 1994 (IEEE float, fact, cbSize)
//	[3] Microsoft, Multiple Channel Audio Data and WAVE Files, 2001 (extensible header)
//	[4] EBU Tech 3306, RF64: An Extended File Format for Audio (ds64, the switch from JUNK)
//	[5] ITU-R BS.2088, Long-form file format (BW64)
//
// The field tables below were written from memory of these; the tests hold them against files made
// by SciPy, by Python's wave module and by libsndfile.
//
// # Layout
//
// All numbers are little endian. A file is one form that holds chunks:
//
//	offset  bytes  field
//	 0      4      "RIFF", or "RF64" or "BW64" when 64-bit sizes count [4][5]
//	 4      4      bytes that follow; all ones in RF64 and BW64. Not read: a killed recorder leaves it stale
//	 8      4      "WAVE"
//	12      ...    chunks
//
// A chunk:
//
//	0      4      name
//	4      4      n, the size of the body; all ones when ds64 holds it
//	8      n      body
//	8+n    n%2    a pad byte that n does not count
//
// Only ds64, fmt and data are read. Any other chunk is skipped, and so is all that follows data.
//
// "ds64", the 64-bit sizes, first in an RF64 or BW64 file [4]:
//
//	 0      8      bytes that follow the first 8 of the file
//	 8      8      size of the data chunk's body
//	16      8      frames, when fact says all ones
//	24      4      t, number of entries in the table
//	28      12 t   table: a chunk's name (4) and the size of its body (8)
//
// "fmt ", the format [1][2][3]:
//
//	 0      2      encoding: 1 PCM, 3 IEEE float, 0xFFFE extensible: see the subformat
//	 2      2      channels
//	 4      4      frames per second
//	 8      4      bytes per second, not read: writers often get it wrong and nothing depends on it
//	12      2      block align: bytes in a frame, channels * bits / 8
//	14      2      bits of a sample's container
//	16      2      size of what follows, 0 or 22; absent in the oldest form
//	18      2      valid bits of a sample, extensible only, as are the next two
//	20      4      channel mask: which loudspeaker each channel belongs to; not read
//	24      16     subformat: encoding (2), then the bytes 00 00 00 00 10 00 80 00 00 aa 00 38 9b 71
//
// "fact" [2], written for IEEE float and not read: the number of frames (4), all ones beyond 32 bits.
//
// "data" [1]: frames, one after the other; a frame is one sample of every channel.
//
// # Samples
//
// An integer sample of b bits is a two's complement number, its digital value integer / 2^(b-1), in
// [-1, 1). A floating-point sample is its digital value as it is: it may go beyond 1, and NaN and
// infinity pass through (a source around this one takes them for lost frames).
//
// Valid bits fewer than the container's are left-justified [3], so the value is still that of the
// whole container. When the bits that ought to be zero are not, Reader.Warnings says so.
//
// # Unfinished files
//
// The size of the data chunk counts, except that frames which the file does not hold are not read,
// and that a size of 0 or all ones with bytes following, as a killed recorder leaves it, means: to
// the end of the file. Whatever was read otherwise than the header says stands in Reader.Warnings.
package wav

const (
	tagPCM        = 1
	tagFloat      = 3
	tagExtensible = 0xFFFE

	unknown32 = 1<<32 - 1 // a 32-bit size that stands elsewhere or nowhere
	unknown64 = 1<<64 - 1 // a 64-bit size that stands nowhere

	formHeader  = 12 // bytes before the first chunk
	chunkHeader = 8  // bytes before a chunk's body
)

// subformatTail is what follows the encoding in the subformat of an extensible header.
const subformatTail = "\x00\x00\x00\x00\x10\x00\x80\x00\x00\xaa\x00\x38\x9b\x71"

// What a person can do about a file that cannot be read.
const (
	exportAgain = "export it again as WAV with PCM 16, 24 or 32 bit or IEEE float 32 or 64 bit"
	copyAgain   = "the file is damaged or was cut short, copy or export it again"
)
