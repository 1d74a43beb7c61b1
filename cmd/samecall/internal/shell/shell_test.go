package shell

import (
	"os/exec"
	"testing"

	"pgregory.net/rapid"
)

func TestWord(t *testing.T) {
	for in, want := range map[string]string{
		"": `""`, "calls.csv": "calls.csv", "a b": `"a b"`, "größe": "größe", "5%": "5%", "it's": `"it's"`,
		`$(x)`: `'$(x)'`, `$(x)'`: `'$(x)'\'''`, `say "no"`: `'say "no"'`,
	} {
		if got := Word(in); got != want {
			t.Errorf("%q: %s, want %s", in, got, want)
		}
	}
	if got := List([]string{"-", "not ok", `a,"b`}); got != `-,not ok,"a,""b"` {
		t.Errorf("%s", got)
	}
}

// A shell reads back what was written, whatever it is.
func TestAShellReadsItBack(t *testing.T) {
	sh, err := exec.LookPath("sh")
	if err != nil {
		t.Skip("there is no sh")
	}
	rapid.Check(t, func(t *rapid.T) {
		value := rapid.StringOf(rapid.RuneFrom([]rune("ab c'\"$`\\!%()#~*;&|<>\n\té–"))).Draw(t, "value")
		out, err := exec.Command(sh, "-c", "printf %s "+Word(value)).Output()
		if err != nil || string(out) != value {
			t.Fatalf("%q written as %s is read as %q, %v", value, Word(value), out, err)
		}
	})
}
