// Package example holds the built-in studies: small, whole, and invented from
// end to end, for a first look at the program and for a study file to start
// from. Each is a folder with a study file and the calls that it names.
package example

import (
	"embed"
	"fmt"
	"io/fs"
	"strings"
)

//go:generate go run ./generate

//go:embed studies
var studies embed.FS

// StudyFile is the name of the study file of every example.
const StudyFile = "study.toml"

// Example describes a built-in study, one line each.
type Example struct {
	Name  string
	Title string // as in its study file
	About string // what it is and what there is to see
}

var examples = []Example{
	{"bore", "Pivot bore 10 H9 of a gate hinge (invented data)",
		"plug gauge, two limits, values, three shifts: a worn go member, one inconsistent shift"},
	{"surface", "Coating of a meter cover, kinds of defect (invented data)",
		"four kinds of defect, four stations, missing calls: one station confuses two kinds"},
	{"shade", "Shade of a stained drawer front, four grades (invented data)",
		"grades from best to worst, three people: one is stricter than the reference"},
	{"weld", "Weld seam of a bench frame, camera and inspectors (invented data)",
		"no reference, a camera and two inspectors: the camera stands apart"},
}

// Names lists the examples, always in the same order.
func Names() []Example { return append([]Example(nil), examples...) }

// FS returns the files of one example, StudyFile among them. The error for an
// unknown name tells the names that are known.
func FS(name string) (fs.FS, error) {
	var known []string
	for _, e := range examples {
		if e.Name == name {
			return fs.Sub(studies, "studies/"+name)
		}
		known = append(known, e.Name)
	}
	return nil, fmt.Errorf("no example is named %q; the examples are %s", name, strings.Join(known, ", "))
}
