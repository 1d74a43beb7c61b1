package report

import (
	"slices"
)

const together = "all together"

// numberTables are all tables for programs: what was studied first, then the
// findings. Two figures do not share a cell, and every figure has its standard
// error, or the reason why it is absent.
func numberTables(r *Record) []Table {
	d := newDocument(r)
	out := []Table{withCommand(studyTable(r), r), causesTable(r), criteriaTable(r), restsTable(r)}
	if r.Agreement.All != nil {
		out = append(out, againstTable(r, true), errorsTable(r), detectionTable(r))
	}
	out = append(out, zoneTable(r), unanimousTable(r), curveLimitsTable(r), cutsTable(r), zonesTable(r), curvesTable(r), gapsTable(r),
		curveFitTable(r), curveErrorsTable(r), withinTable(r))
	if len(r.Study.Appraisers) > 1 {
		out = append(out, newSquare(r).numbers()...)
		out = append(out, pairsTable(r), leanTable(r), kindsTable(r, r.Agreement.Between.Pairs))
	}
	out = append(out, coefficientsTable(r), weightedTable(r), categoriesTable(r))
	out = append(out, crossTables(r)...)
	out = append(out, directionTable(r), partsTable(r), standardErrorsTable(d), methodsTable(d), absentTable(r, d), callsTable(r))
	return slices.DeleteFunc(out, func(t Table) bool { return len(t.Rows) == 0 })
}
