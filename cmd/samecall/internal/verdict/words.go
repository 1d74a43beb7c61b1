package verdict

import (
	"strings"

	"samecall/cmd/samecall/internal/format"
)

// manyNames is how many names a sentence lists.
const manyNames = 8

// list names parts in a sentence.
func list(names []string, parts []int) string {
	if len(parts) == 0 {
		return "none"
	}
	var out []string
	for _, part := range parts {
		if out = append(out, names[part]); len(out) > manyNames {
			break
		}
	}
	return few(out, len(parts))
}

// few names some of so many.
func few(names []string, of int) string {
	if of <= manyNames {
		return and(names)
	}
	return strings.Join(names[:manyNames], ", ") + " and " + format.Count(of-manyNames) + " more"
}

func (f *finder) list(parts []int) string { return list(f.Study.Parts, parts) }

// theParts names parts as parts: some are named by a number, which would read as
// a count.
func theParts(names []string, parts []int) string {
	if len(parts) == 1 {
		return "part " + list(names, parts)
	}
	return "parts " + list(names, parts)
}

func (f *finder) theParts(parts []int) string { return theParts(f.Study.Parts, parts) }

// and joins names: "A, B and C".
func and(names []string) string {
	if len(names) < 2 {
		return strings.Join(names, "")
	}
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " and " + names[last]
}

// stop ends a sentence that may end with a name, which may end with a stop.
func stop(s string) string { return strings.TrimSuffix(s, ".") + "." }

func are(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}

// capital begins a sentence with a text of our own.
func capital(s string) string { return strings.ToUpper(s[:1]) + s[1:] }

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}
