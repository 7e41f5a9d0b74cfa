package table

import (
	"bytes"
	"encoding/binary"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// decode turns bytes into text and says what it assumed if that was not plain.
func decode(data []byte) (text, note string, fault *Error) {
	bare := bytes.TrimPrefix(data, []byte("\ufeff"))
	switch {
	case bytes.HasPrefix(data, []byte{0xff, 0xfe}):
		text, note = utf16Text(data[2:], binary.LittleEndian), "read as UTF-16"
	case bytes.HasPrefix(data, []byte{0xfe, 0xff}):
		text, note = utf16Text(data[2:], binary.BigEndian), "read as UTF-16"
	case utf8.Valid(bare):
		text = string(bare)
	default:
		text, note = almostUTF8(bare)
	}
	if at := strings.IndexByte(text, 0); at >= 0 {
		return "", "", &Error{Line: 1 + strings.Count(text[:at], "\n"), Reason: "there is a zero byte; this is not a text file"}
	}
	return text, note, nil
}

// almostUTF8 reads bytes that are not quite UTF-8: as UTF-8 with damage if more
// of it is whole than broken, else as what spreadsheets in the West wrote
// before.
func almostUTF8(data []byte) (text, note string) {
	whole, broken := 0, 0
	for rest := data; len(rest) > 0; {
		r, size := utf8.DecodeRune(rest)
		switch {
		case r == utf8.RuneError && size == 1:
			broken++
		case size > 1:
			whole++
		}
		rest = rest[size:]
	}
	if whole > broken {
		return strings.ToValidUTF8(string(data), "\ufffd"), "some bytes are not UTF-8 and now read \ufffd"
	}
	return windows1252(data), "not UTF-8; read as Windows-1252"
}

func utf16Text(data []byte, order binary.ByteOrder) string {
	units := make([]uint16, len(data)/2)
	for i := range units {
		units[i] = order.Uint16(data[2*i:])
	}
	return string(utf16.Decode(units))
}

// windows1252 differs from Latin-1 in the bytes 0x80 to 0x9f (WHATWG Encoding
// Standard, index windows-1252).
func windows1252(data []byte) string {
	const high = "€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ"
	table := []rune(high)
	var b strings.Builder
	b.Grow(len(data) + len(data)/8)
	for _, c := range data {
		switch {
		case c < 0x80:
			b.WriteByte(c)
		case c < 0xa0:
			b.WriteRune(table[c-0x80])
		default:
			b.WriteRune(rune(c))
		}
	}
	return b.String()
}
