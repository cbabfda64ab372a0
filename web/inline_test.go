package web

import (
	"encoding/base64"
	"regexp"
	"strings"
	"testing"
)

func TestSheetsForFilesHoldTheirFonts(t *testing.T) {
	sheet := Sheet("css/leeway.css")
	refs := regexp.MustCompile(`url\(([^)]*)\)`).FindAllStringSubmatch(sheet, -1)
	if len(refs) != 2 {
		t.Fatalf("%d references", len(refs))
	}
	for i, name := range []string{"fonts/next.woff2", "fonts/mono.woff2"} {
		data, ok := strings.CutPrefix(strings.Trim(refs[i][1], `"`), "data:font/woff2;base64,")
		if got, err := base64.StdEncoding.DecodeString(data); !ok || err != nil || string(got) != Text(name) {
			t.Errorf("%s is not in its place (%v)", name, err)
		}
	}
	if strings.Contains(sheet, "@import") || strings.Contains(sheet, "</") {
		t.Error("the sheet loads another, or ends its element")
	}
}
