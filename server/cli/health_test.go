package cli

import (
	"bytes"
	"context"
	"net/http"
	"net/http/httptest"
	"strings"
	"testing"
)

func TestHealth(t *testing.T) {
	status := http.StatusOK
	srv := httptest.NewServer(http.HandlerFunc(func(w http.ResponseWriter, _ *http.Request) { w.WriteHeader(status) }))
	ask := func(url string) (int, string) {
		var out, errs bytes.Buffer
		code := Execute(context.Background(), []string{"health", url}, strings.NewReader(""), &out, &errs)
		return code, errs.String()
	}
	if code, text := ask(srv.URL); code != 0 {
		t.Errorf("a server that is well: exit %d, %s", code, text)
	}
	status = http.StatusServiceUnavailable
	if code, text := ask(srv.URL); code != 2 || !strings.Contains(text, "503") {
		t.Errorf("a server that is not: exit %d, %s", code, text)
	}
	srv.Close()
	if code, _ := ask(srv.URL); code != 2 {
		t.Errorf("no server: exit %d", code)
	}
}
