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
	for i, part := range parts {
		if i == manyNames {
			return strings.Join(out, ", ") + " and " + format.Count(len(parts)-manyNames) + " more"
		}
		out = append(out, names[part])
	}
	return and(out)
}

func (f *finder) list(parts []int) string { return list(f.Study.Parts, parts) }

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
