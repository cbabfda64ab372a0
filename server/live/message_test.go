package live

import (
	"strings"
	"testing"
)

func TestMessagesOfEveryKind(t *testing.T) {
	for _, good := range []string{
		`{"kind":"play"}`, `{"kind":"pause"}`, `{"kind":"tick"}`, `{"kind":"restart"}`, `{"kind":"resync"}`,
		`{"kind":"drag","what":"goal","x":1.2,"y":3.4,"done":true}`, `{"kind":"speed","value":0}`,
		`{"kind":"number","path":"robot.radius_m","value":0.2}`, `{"kind":"choice","path":"robot.position","value":"true_pose"}`,
		`{"kind":"play","something new":1}`,
	} {
		if _, err := parseMessage([]byte(good)); err != nil {
			t.Errorf("%s: %v", good, err)
		}
	}
	for _, bad := range []string{
		``, `{`, `[]`, `null`, `"play"`, `{"kind":"dance"}`, `{}`, `{"kind":1}`,
		`{"kind":"speed"}`, `{"kind":"speed","value":"4"}`, `{"kind":"speed","value":null}`, `{"kind":"number","path":"x","value":[1]}`,
		`{"kind":"choice","path":"x","value":3}`, `{"kind":"choice","value":null}`,
		`{"kind":"drag","what":"goal","x":1e300,"y":0}`, `{"kind":"drag","what":"goal","x":"1","y":0}`, `{"kind":"drag","x":1e999}`,
		`{"kind":"play"} {"kind":"pause"}`, "\x00\xff",
	} {
		m, err := parseMessage([]byte(bad))
		if err == nil {
			t.Errorf("%q was taken as %+v", bad, m)
		} else if text := err.Error(); strings.Contains(text, "json") || len(text) > 80 {
			t.Errorf("%q: %q is not for people", bad, text)
		}
	}
}

func TestSentence(t *testing.T) {
	for in, want := range map[string]string{
		"": "", "the goal must be on the floor": "The goal must be on the floor.", "Done.": "Done.", "élan": "Élan.",
	} {
		if got := sentence(in); got != want {
			t.Errorf("%q became %q", in, got)
		}
	}
}
