package scenario

import (
	"bytes"
	"compress/flate"
	"hash/crc32"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func checkLink(t interface {
	Fatalf(string, ...any)
}, s *Scenario) {
	data := s.Encode()
	if strings.Trim(data, "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_") != "" {
		t.Fatalf("a link that must be escaped: %s", data)
	}
	back, err := Decode(data)
	if err != nil {
		t.Fatalf("%v", err)
	}
	if !bytes.Equal(back.Print(), s.Print()) {
		t.Fatalf("a link changed the scenario: %s", cmp.Diff(s, back))
	}
}

func TestLinks(t *testing.T) {
	for _, text := range []string{plain, everything, tableLogic} {
		s := mustParse(t, text)
		checkLink(t, s)
		for _, form := range []string{"http://127.0.0.1:8080/open#%", "https://leeway.invalid/open?x=1#%", "#%", "  <http://h/open#%>\n"} {
			back, err := Decode(strings.Replace(form, "%", s.Encode(), 1))
			if err != nil || !cmp.Equal(back, s) {
				t.Errorf("%s: %v", form, err)
			}
		}
	}
	for file, text := range shipped(t) {
		checkLink(t, mustParse(t, string(text)))
		if n := len(mustParse(t, string(text)).Encode()); n > LongLink {
			t.Errorf("%s: a shipped scenario makes a link of %d characters", file, n)
		} else {
			t.Logf("%s: %d characters for %d bytes", file, n, len(text))
		}
	}
}

// TestOldLinks reads links made by the first version of the encoding: neither a change of the
// dictionary nor of the packing may make links that people have kept unreadable.
func TestOldLinks(t *testing.T) {
	if sum := crc32.ChecksumIEEE(linkDictionary); sum != frozenDictionary {
		t.Errorf("the dictionary of version 1 has changed (CRC %#08x)", sum)
	}
	s, err := Decode(oldLink)
	if err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile("testdata/old-link.json") // what was packed; never to be written anew
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(mustParse(t, string(text)), s); d != "" {
		t.Error(d)
	}
}

func TestBadLinks(t *testing.T) {
	good := mustParse(t, everything).Encode()
	pack := func(text []byte) string {
		var b bytes.Buffer
		b.Write([]byte{0, 0, 0, 0})
		w, _ := flate.NewWriterDict(&b, flate.BestCompression, linkDictionary)
		_, _ = w.Write(text)
		_ = w.Close()
		sum := crc32.ChecksumIEEE(text)
		copy(b.Bytes(), []byte{byte(sum >> 24), byte(sum >> 16), byte(sum >> 8), byte(sum)})
		return "1" + linkText.EncodeToString(b.Bytes())
	}
	flip := func(i int) string {
		c := byte('A')
		if good[i] == c {
			c = 'B'
		}
		return good[:i] + string(c) + good[i+1:]
	}
	for _, c := range []struct{ name, link, want string }{
		{"empty", "", "the link is empty"},
		{"empty fragment", "http://h/open#", "the link is empty"},
		{"no fragment", "http://h/open", "has been lost"},
		{"newer", "2" + good[1:], "newer Leeway"},
		{"other", "x" + good[1:], "no link to a scenario"},
		{"words", "hello", "no link to a scenario"},
		{"padding", good + "=", "damaged"},
		{"space inside", good[:20] + " " + good[20:], "damaged"},
		{"version only", "1", "cut short"},
		{"sum only", "1AAAAAA", "cut short"},
		{"bomb", pack(make([]byte, 64<<20)), "unpacks to more than 4 MB"},
		{"too long", "1" + strings.Repeat("A", MaxLinkChars), "longer than"},
		{"a bad file", pack([]byte(strings.Replace(plain, `"x_m": 11`, `"x_m": 12.5`, 1))), "the goal is not on the floor"},
		{"no file", pack([]byte("{}")), "leeway is missing"},
		{"trailing", func() string {
			b, _ := linkText.DecodeString(good[1:])
			return "1" + linkText.EncodeToString(append(b, 0))
		}(), "damaged"},
	} {
		s, err := Decode(c.link)
		if s != nil || err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.name, err, c.want)
		}
	}
	for i := 1; i < len(good); i++ {
		if _, err := Decode(good[:i]); err == nil {
			t.Errorf("a link cut to %d characters is accepted", i)
		}
		// A few bits of the packed form mean nothing; no change of the others goes unnoticed.
		if s, err := Decode(flip(i)); err == nil && s.Encode() != good {
			t.Errorf("a link with another character %d is another scenario", i)
		}
	}
}

// FuzzDecode: no link makes the reader panic, and an accepted one survives another round.
func FuzzDecode(f *testing.F) {
	for _, text := range []string{plain, everything, tableLogic} {
		s := mustParse(f, text)
		f.Add(s.Encode())
		f.Add("http://h/open#" + s.Encode())
	}
	f.Add(oldLink)
	f.Fuzz(func(t *testing.T, link string) {
		s, err := Decode(link)
		if err != nil {
			if p, ok := err.(Problems); !ok || len(p) == 0 {
				t.Fatalf("%T", err)
			}
			return
		}
		checkLink(t, s)
	})
}

const (
	frozenDictionary = 0x68daa713
	oldLink          = "1npNfeOzcT2qEMBQG8KsE1xreS5SQpWdol260DSKtLRR6o96kFxuSjDNGjf8mA8OgGxciIqjf5_tB5qIuJ1VjeMlcTt9JPUq9129SKfKjyndSlW8f1ElBCSBQSpalIgUpF0OxW1JiIRb7D4s3F9msT1G08Xg2qnhNqqJJVX0WUA7ultpjt2SlmRlZ6LrsJ5nr5f_v91ORIsqLaJiXMMVdALgVvFrcyV2J3Ate17ITjIa83tWywNolnkG78Og3QfsNqgTE0W7G7YZ7yo3---CUx_orchSdlUVnQF19ptpegx4AokLVoB4wuWy004y2i5Hfi2y_mNcivxW1uCxFcAcpar5q2r0bDhOxrJucnAIAAP__"
)
