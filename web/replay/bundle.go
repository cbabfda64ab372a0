package replay

import (
	"fmt"
	"path"
	"regexp"
	"strings"
)

// A page opened from disk cannot load modules. bundle writes a module and all that
// it imports, each in a function of its own, so that their names stay their own. It
// knows the forms that our modules use, no others: named imports of relative paths,
// and exported functions, classes and constants.
var (
	imported = regexp.MustCompile(`(?m)^import \{([^}]*)\} from '([^']+)';\n`)
	exported = regexp.MustCompile(`(?m)^export (?:async )?(?:function\*?|class|const) ([\w$]+)`)
	leftover = regexp.MustCompile(`(?m)^(?:import|export)\b.*`)
)

// bundle returns one script. read returns the text of a module by its path.
func bundle(entry string, read func(name string) (string, error)) (string, error) {
	b := &bundler{read: read, state: map[string]int{}}
	b.out.WriteString("'use strict';\nconst modules = {};\n")
	if err := b.add(entry); err != nil {
		return "", err
	}
	return b.out.String(), nil
}

type bundler struct {
	read  func(string) (string, error)
	state map[string]int // 1: being added, 2: added
	out   strings.Builder
}

func (b *bundler) add(name string) error {
	switch b.state[name] {
	case 1:
		return fmt.Errorf("%s imports itself, by way of others", name)
	case 2:
		return nil
	}
	b.state[name] = 1
	text, err := b.read(name)
	if err != nil {
		return err
	}
	for _, m := range imported.FindAllStringSubmatch(text, -1) {
		if err := b.add(path.Join(path.Dir(name), m[2])); err != nil {
			return err
		}
	}
	body := imported.ReplaceAllStringFunc(text, func(s string) string {
		m := imported.FindStringSubmatch(s)
		return fmt.Sprintf("const {%s} = modules['%s'];\n", strings.ReplaceAll(m[1], " as ", ": "), path.Join(path.Dir(name), m[2]))
	})
	var names []string
	for _, m := range exported.FindAllStringSubmatch(body, -1) {
		names = append(names, m[1])
	}
	body = exported.ReplaceAllStringFunc(body, func(s string) string { return strings.TrimPrefix(s, "export ") })
	if l := leftover.FindString(body); l != "" {
		return fmt.Errorf("%s: %q cannot be bundled", name, l)
	}
	if strings.Contains(body, "</script") || strings.Contains(body, "<!--") {
		return fmt.Errorf("%s holds what would end its element", name)
	}
	fmt.Fprintf(&b.out, "modules['%s'] = (() => {\n%s\nreturn {%s};\n})();\n", name, strings.TrimSpace(body), strings.Join(names, ", "))
	b.state[name] = 2
	return nil
}
