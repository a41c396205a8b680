package importers

import (
	"bytes"
	"slices"
	"strings"
	"unicode/utf8"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"

	"tickdrawer/inventory"
)

const (
	utf8Name    = "utf-8"
	utf16LEName = "utf-16le"
	utf16BEName = "utf-16be"
	ansiName    = "windows-1252"
)

// namedEncodings are the encodings that a person can name, UTF-8 apart.
var namedEncodings = []struct {
	name     string
	encoding encoding.Encoding
}{
	{utf16LEName, unicode.UTF16(unicode.LittleEndian, unicode.IgnoreBOM)},
	{utf16BEName, unicode.UTF16(unicode.BigEndian, unicode.IgnoreBOM)},
	{ansiName, charmap.Windows1252},
	{"windows-1250", charmap.Windows1250},
	{"iso-8859-15", charmap.ISO8859_15},
	{"cp850", charmap.CodePage850},
	{"macintosh", charmap.Macintosh},
}

// otherNames are other names of the same encodings. Windows-1252 reads all that
// ISO 8859-1 prints.
var otherNames = map[string]string{
	"utf8": utf8Name, "utf16le": utf16LEName, "utf16be": utf16BEName,
	"cp1252": ansiName, "iso-8859-1": ansiName, "latin-1": ansiName, "latin1": ansiName,
	"cp1250": "windows-1250", "latin-9": "iso-8859-15", "ibm850": "cp850",
}

// Encodings returns the names of the encodings that Options.Encoding takes.
func Encodings() []string {
	names := []string{utf8Name}
	for _, e := range namedEncodings {
		names = append(names, e.name)
	}
	return names
}

// marks are the byte order marks that begin a text and what they announce.
var marks = []struct{ mark, name string }{
	{"\xEF\xBB\xBF", utf8Name},
	{"\xFF\xFE\x00\x00", "utf-32"}, // before UTF-16, which begins the same
	{"\x00\x00\xFE\xFF", "utf-32"},
	{"\xFF\xFE", utf16LEName},
	{"\xFE\xFF", utf16BEName},
}

// decoded is a file as text.
type decoded struct {
	text     string
	encoding string // one of Encodings()
	marked   bool   // began with a byte order mark
}

// decode returns the content as text: by the name where one is given, else by
// its byte order mark, else as UTF-16 where every other byte is nought, else as
// UTF-8 where it is valid, else as Windows-1252. The errors are an unknown name,
// bytes that the encoding does not allow, and a file that is not text.
func decode(content []byte, name string) (decoded, error) {
	if bytes.HasPrefix(content, []byte("PK\x03\x04")) {
		return decoded{}, refused("this is a spreadsheet or an archive, not a CSV file: open it and save the sheet as CSV")
	}
	name = strings.ToLower(strings.TrimSpace(name))
	if known, found := otherNames[name]; found {
		name = known
	}
	if name != "" && !slices.Contains(Encodings(), name) {
		return decoded{}, refused("unknown encoding %s: it is one of %s", quoted(name), strings.Join(Encodings(), ", "))
	}
	d := decoded{encoding: name}
	for _, m := range marks {
		if rest, found := bytes.CutPrefix(content, []byte(m.mark)); found && (name == "" || name == m.name) {
			d.encoding, d.marked, content = m.name, true, rest
			break
		}
	}
	if d.encoding == "utf-32" {
		return decoded{}, refused("the file is UTF-32 text: save it as UTF-8")
	}
	if d.encoding == "" {
		var err error
		if d.encoding, err = guessedEncoding(content); err != nil {
			return decoded{}, err
		}
	}
	if d.encoding == utf8Name {
		d.text = string(content)
		if at := invalidUTF8(d.text); at >= 0 {
			return decoded{}, refused("line %d: byte 0x%02X is not UTF-8 text: save the file as UTF-8, or say which encoding it has", lineAt(d.text, at), d.text[at])
		}
	}
	for _, e := range namedEncodings {
		if e.name != d.encoding {
			continue
		}
		if len(content)%2 != 0 && (e.name == utf16LEName || e.name == utf16BEName) {
			return decoded{}, refused("the %s text ends within a character: the file is cut off, save it again", e.name)
		}
		text, err := e.encoding.NewDecoder().Bytes(content)
		if err != nil {
			return decoded{}, refused("the file is not %s text: %v", e.name, err)
		}
		d.text = string(text)
	}
	// DOS programs end a text with this character.
	d.text = strings.TrimSuffix(d.text, "\x1A")
	if at := strings.IndexFunc(d.text, controlsTerminal); at >= 0 {
		return decoded{}, refused("line %d: byte 0x%02X does not occur in text: this is not a CSV file, or a damaged one", lineAt(d.text, at), d.text[at])
	}
	return d, nil
}

// guessedEncoding returns the encoding of a content without a byte order mark.
func guessedEncoding(content []byte) (string, error) {
	if at := bytes.IndexByte(content, 0); at >= 0 {
		if name := guessedUTF16(content); name != "" {
			return name, nil
		}
		return "", refused("byte %d is nought, which does not occur in text: this is not a CSV file, or a damaged one", at+1)
	}
	// Where some letters beyond ASCII are sound UTF-8 and fewer are not, two
	// encodings were mixed, and Windows-1252 would spell the sound ones wrong.
	sound, broken, first := 0, 0, -1
	for at := 0; at < len(content); {
		if content[at] < utf8.RuneSelf {
			at++
			continue
		}
		r, size := utf8.DecodeRune(content[at:])
		if r == utf8.RuneError && size == 1 {
			if broken++; first < 0 {
				first = at
			}
		} else {
			sound++
		}
		at += size
	}
	switch {
	case broken == 0:
		return utf8Name, nil
	case sound > broken:
		return "", refused("line %d: byte 0x%02X is not UTF-8 text, though the letters elsewhere are: correct it, or say which encoding the file has",
			lineAt(string(content[:first]), first), content[first])
	}
	return ansiName, nil
}

// utf16Sample is how many bytes are looked at for the pattern of UTF-16.
const utf16Sample = 4 << 10

// guessedUTF16 returns UTF-16 of the byte order in which most high bytes are
// nought, as they are in Latin text, and "" where the noughts lie otherwise.
func guessedUTF16(content []byte) string {
	sample := content[:min(len(content), utf16Sample)]
	var noughts [2]int
	for at, c := range sample {
		if c == 0 {
			noughts[at%2]++
		}
	}
	most := len(sample) / 4 // half of the characters
	switch {
	case noughts[0] == 0 && noughts[1] > most:
		return utf16LEName
	case noughts[1] == 0 && noughts[0] > most:
		return utf16BEName
	}
	return ""
}

// invalidUTF8 returns the offset of the first byte that is not UTF-8, or -1.
func invalidUTF8(text string) int {
	if utf8.ValidString(text) {
		return -1
	}
	for at, r := range text {
		if r == utf8.RuneError {
			if _, size := utf8.DecodeRuneInString(text[at:]); size == 1 {
				return at
			}
		}
	}
	return -1
}

// controlsTerminal reports whether the character is a control code of ASCII
// other than the white space of tables.
func controlsTerminal(r rune) bool {
	return r < ' ' && r != '\t' && r != '\n' && r != '\r' || r == 0x7F
}

// lineAt returns the line, from 1, in which the byte at the offset lies.
func lineAt(text string, offset int) int { return 1 + lineEnds(text[:offset]) }

// lineEnds returns how many lines end in the text: by LF, CR LF or CR alone.
func lineEnds(text string) int {
	ends := strings.Count(text, "\n")
	if strings.IndexByte(text, '\r') < 0 {
		return ends
	}
	return ends + strings.Count(text, "\r") - strings.Count(text, "\r\n")
}

// refused returns the error of a file that cannot be read at all.
func refused(format string, args ...any) error {
	return inventory.Errorf(inventory.Invalid, format, args...)
}
