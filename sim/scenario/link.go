package scenario

import (
	"bytes"
	"compress/flate"
	_ "embed"
	"encoding/base64"
	"encoding/binary"
	"errors"
	"hash/crc32"
	"io"
	"strings"
)

// Link data is a digit for the version of the encoding and then, in base64url
// without padding, the CRC-32 (IEEE) of the canonical text, big-endian, and that text
// deflated (RFC 1951) with a dictionary that both sides know. The dictionary is
// frozen with the version: changing it would make old links unreadable.

const linkVersion = '1'

//go:embed link1.dict
var linkDictionary []byte

var linkText = base64.RawURLEncoding.Strict()

// Encode returns the scenario as link data: canonical text, compressed, base64url without padding.
func (s *Scenario) Encode() string {
	text := s.Print()
	var b bytes.Buffer
	b.Write(binary.BigEndian.AppendUint32(nil, crc32.ChecksumIEEE(text)))
	w, err := flate.NewWriterDict(&b, flate.BestCompression, linkDictionary)
	if err == nil {
		if _, err = w.Write(text); err == nil {
			err = w.Close()
		}
	}
	if err != nil {
		panic("scenario: deflating into memory failed: " + err.Error()) // cannot happen: the level is valid and memory takes every write
	}
	return string(linkVersion) + linkText.EncodeToString(b.Bytes())
}

// Decode reads link data, or a whole link (everything after '#'). The error is Problems.
func Decode(link string) (*Scenario, error) {
	link = strings.Trim(strings.TrimSpace(link), "<>")
	if len(link) > MaxLinkChars {
		return nil, problemf("the link is longer than %d characters", MaxLinkChars)
	}
	_, data, hash := strings.Cut(link, "#")
	if !hash {
		data = link
	}
	switch {
	case !hash && strings.Contains(link, "/"):
		return nil, problemf("the link holds no scenario: that is the part after #, which has been lost")
	case data == "":
		return nil, problemf("the link is empty")
	case data[0] > linkVersion && data[0] <= '9':
		return nil, problemf("the link was made by a newer Leeway (its encoding is version %c; this one reads version %c)", data[0], linkVersion)
	case data[0] != linkVersion:
		return nil, problemf("this is no link to a scenario")
	}
	packed, err := linkText.DecodeString(data[1:])
	if err != nil {
		return nil, problemf("the link is damaged: it holds characters that no link has, or its end is missing")
	}
	if len(packed) < 4 {
		return nil, problemf("the link is cut short")
	}
	source := bytes.NewReader(packed[4:])
	text, err := io.ReadAll(io.LimitReader(flate.NewReaderDict(source, linkDictionary), MaxBytes+1))
	switch {
	case len(text) > MaxBytes:
		return nil, problemf("the link unpacks to more than %d MB", MaxBytes>>20)
	case errors.Is(err, io.ErrUnexpectedEOF):
		return nil, problemf("the link is cut short")
	case err != nil || source.Len() > 0 || crc32.ChecksumIEEE(text) != binary.BigEndian.Uint32(packed):
		return nil, problemf("the link is damaged")
	}
	return Parse(text)
}
