package study

import "samecall/cmd/samecall/internal/shell"

// asFlag writes a setting that lists words as the flag that gives it, as it is
// typed: --reject "-,not ok".
func asFlag(key string, words ...string) string {
	return "--" + key + " " + shell.Word(shell.List(words))
}
