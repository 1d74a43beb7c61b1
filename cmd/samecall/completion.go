package main

import (
	"strings"

	"github.com/spf13/cobra"
)

// completions is how each shell is told to complete: in the shell that is open,
// and in every one from then on. The folders are the usual ones of the shells
// (cobra's own help; that of bash, which needs no rights, from memory).
var completions = map[string]string{
	"bash": `  source <(samecall completion bash)
  mkdir -p ~/.local/share/bash-completion/completions
  samecall completion bash > ~/.local/share/bash-completion/completions/samecall`,
	"zsh": `  source <(samecall completion zsh)
  samecall completion zsh > "${fpath[1]}/_samecall"`,
	"fish": `  samecall completion fish | source
  samecall completion fish > ~/.config/fish/completions/samecall.fish`,
	"powershell": `  samecall completion powershell | Out-String | Invoke-Expression
  samecall completion powershell >> $PROFILE`,
}

// explainCompletion says in the help of cobra's command completion, and of
// those below it, how a shell is made to complete.
func explainCompletion(c *cobra.Command) {
	const what = `With it the shell completes, at the tab key, the commands of samecall, their
flags, and what these take where it is one of a few words.`
	c.Short = "Let the shell complete commands and flags"
	c.Long = "completion writes a script for a shell: bash, fish, powershell or zsh.\n" + what + `

In the examples, the first line for each shell loads the script in the shell
that is open; the others make every shell load it that is opened from then on.
bash needs the package bash-completion for it. zsh needs this line in ~/.zshrc:
autoload -U compinit; compinit`
	var all []string
	for _, shell := range c.Commands() {
		shell.Short = "The script for " + shell.Name()
		shell.Long = shell.Name() + " writes the script for this shell.\n" + what + `

In the examples, the first line loads the script in the shell that is open; the
others make every shell load it that is opened from then on.`
		shell.Example = completions[shell.Name()]
		all = append(all, shell.Example)
	}
	c.Example = strings.Join(all, "\n")
}
