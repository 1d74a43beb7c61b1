package main

import (
	"errors"
	"fmt"
	"io"
	"runtime/debug"
	"strings"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

// Exit statuses, as docs and scripts know them.
const (
	exitDone      = 0
	exitShort     = 1 // done, and the level required was not reached
	exitUsage     = 2 // the command line is wrong, or a file cannot be opened or written
	exitWrongData = 3
)

// streams is what a command reads from and writes to.
type streams struct {
	in       io.Reader
	out, err io.Writer
}

// run is the whole program: it takes the arguments behind the program's name
// and returns the exit status.
func run(args []string, in io.Reader, out, errs io.Writer) int {
	root := newRoot(streams{in, out, errs})
	root.SetArgs(args)
	err := root.Execute()
	if err == nil {
		return exitDone
	}
	var status statusError
	if errors.As(err, &status) {
		if status.err != nil {
			say(errs, status.err)
		}
		return status.status
	}
	say(errs, err)
	var problems *study.Problems
	if errors.As(err, &problems) {
		return exitWrongData
	}
	return exitUsage
}

// say writes an error to people, a line for each thing that is wrong. Names
// in it are those of files and of what stands in them: each line is made safe
// for a terminal.
func say(w io.Writer, err error) {
	var problems *study.Problems
	joined, several := err.(interface{ Unwrap() []error })
	switch {
	case errors.As(err, &problems):
		for _, line := range problems.Lines() {
			fmt.Fprintln(w, format.Plain(line))
		}
	case several:
		for _, e := range joined.Unwrap() {
			say(w, e)
		}
	default:
		fmt.Fprintln(w, "samecall:", format.Plain(err.Error()))
	}
}

// statusError ends the program with a status of its own, and a message
// unless err is nil.
type statusError struct {
	status int
	err    error
}

func (e statusError) Error() string {
	if e.err == nil {
		return fmt.Sprintf("exit status %d", e.status)
	}
	return e.err.Error()
}

func (e statusError) Unwrap() error { return e.err }

func newRoot(s streams) *cobra.Command {
	root := &cobra.Command{
		Use:   "samecall",
		Short: "Can the yes and no of this inspection be trusted?",
		Long: `samecall reads the calls of a pass/fail or graded inspection study (several
appraisers calling the same parts several times) and tells whether the calls
can be trusted: does each appraiser repeat its own calls, do they agree with
each other, do they agree with the truth, how many bad parts slip through and
how many good ones are thrown out, and how far the study can show it.`,
		Example: `  samecall judge --example bore      look at a whole answer, on invented data
  samecall check calls.csv           is my file read as I mean it?
  samecall judge calls.csv           the answer for my own calls
  samecall judge study.toml --full   everything there is`,
		Version:       version(),
		SilenceErrors: true,
		SilenceUsage:  true,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) > 0 {
				return fmt.Errorf("there is no command %q; samecall --help lists them", args[0])
			}
			return nil
		},
		PersistentPreRunE: checkLine,
		RunE:              func(cmd *cobra.Command, args []string) error { return cmd.Help() },
	}
	root.SetIn(s.in)
	root.SetOut(s.out)
	root.SetErr(s.err)
	root.SetVersionTemplate("samecall {{.Version}}\n")
	root.SetFlagErrorFunc(flagError)
	root.AddCommand(newJudge(s), newCheck(s), newZone(s), newRisk(s), newShort(s), newFlaw(s), newExample(s))
	root.SetUsageTemplate(strings.ReplaceAll(root.UsageTemplate(), ".FlagUsages ", ".FlagUsagesWrapped 100 "))
	ownHelp(root)
	return root
}

// ownHelp makes cobra's own commands, help and completion, explain themselves
// and refuse what they do not know, as the others do.
func ownHelp(root *cobra.Command) {
	root.InitDefaultHelpCmd()
	root.InitDefaultCompletionCmd()
	for _, c := range root.Commands() {
		switch c.Name() {
		case "help":
			c.Short = "What a command does, with examples"
			c.Long = "help tells what a command does and lists its flags, as --help behind the command does."
			c.Example = "  samecall help judge"
			c.Args = func(_ *cobra.Command, args []string) error {
				found, rest, err := root.Find(args)
				if err != nil || len(rest) > 0 || found == nil {
					return fmt.Errorf("there is no command %q; samecall --help lists them", strings.Join(args, " "))
				}
				return nil
			}
		case "completion":
			explainCompletion(c)
			c.Args = func(_ *cobra.Command, args []string) error {
				if len(args) > 0 {
					return fmt.Errorf("there is no shell %q; expected bash, fish, powershell or zsh", args[0])
				}
				return nil
			}
			c.RunE = func(c *cobra.Command, _ []string) error { return c.Help() }
		}
	}
}

// version is that of the module, as the Go toolchain recorded it.
func version() string {
	if info, ok := debug.ReadBuildInfo(); ok && info.Main.Version != "" {
		if info.Main.Version == "(devel)" {
			return "unversioned build"
		}
		return info.Main.Version
	}
	return "(unknown)"
}
