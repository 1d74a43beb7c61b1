package study

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"io"
	"path"
	"strings"

	"github.com/xuri/excelize/v2"
)

// A program that writes a workbook without calculating it leaves formulas
// without a result. To the library such a cell is like an empty one, which
// would be a missing call; here they are looked for in the sheet itself
// (ECMA-376 part 1, 18.3.1.4 c: f is the formula, v its result).

// formulaCell is a cell of a sheet.
type formulaCell struct {
	Ref     string    `xml:"r,attr"`
	Type    string    `xml:"t,attr"`
	Formula *struct{} `xml:"f"`
	Result  *string   `xml:"v"`
}

// unanswered reports whether the cell holds a formula and no result. An empty
// text is a result.
func (c *formulaCell) unanswered() bool {
	return c.Formula != nil && (c.Result == nil || *c.Result == "" && c.Type != "str")
}

// withoutResult returns a problem for each formula without a result, down to
// the header in any column and below in a column that is read; of very many,
// the first.
func withoutResult(data []byte, sheet string, header int, reads func(field int) bool) (list []Problem) {
	in := sheetXML(data, sheet)
	if in == nil {
		return nil
	}
	defer in.Close()
	d := xml.NewDecoder(in)
	row, column := 0, 0
	for len(list) < 1<<16 {
		token, err := d.Token()
		if err != nil {
			return list
		}
		start, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		switch start.Name.Local {
		case "row":
			row, column = row+1, 0
			for _, a := range start.Attr {
				if n, ok := wholeNumber([]byte(a.Value)); ok && a.Name.Local == "r" {
					row = n
				}
			}
		case "c":
			column++
			var c formulaCell
			if err := d.DecodeElement(&c, &start); err != nil {
				return list
			}
			if x, y, err := excelize.CellNameToCoordinates(c.Ref); err == nil {
				column, row = x, y
			}
			if c.unanswered() && (row <= header || reads(column-1)) {
				list = append(list, Problem{Line: row, Column: column, Found: "a formula without a result", Expected: "a result or a value",
					Text: "open and save the workbook in the program that made it, or write values"})
			}
		}
	}
	return list
}

// sheetXML opens the XML of a sheet that has formulas; nil if it has none.
func sheetXML(data []byte, sheet string) io.ReadCloser {
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		return nil
	}
	name := sheetFile(z, sheet)
	in := openIn(z, name)
	if in == nil || !hasFormula(in) {
		return nil
	}
	return openIn(z, name)
}

func openIn(z *zip.Reader, name string) io.ReadCloser {
	for _, f := range z.File {
		if strings.EqualFold(strings.ReplaceAll(f.Name, "\\", "/"), name) {
			if in, err := f.Open(); err == nil {
				return in
			}
		}
	}
	return nil
}

// hasFormula looks for the beginning of an element f, with or without a prefix.
func hasFormula(in io.ReadCloser) bool {
	defer in.Close()
	const overlap = 3
	buf := make([]byte, overlap, 64<<10)
	for {
		n, err := readUpTo(in, buf[overlap:cap(buf)])
		text := buf[:overlap+n]
		for _, begin := range []string{"<f", ":f"} {
			for _, end := range []string{">", "/", " "} {
				if bytes.Contains(text, []byte(begin+end)) {
					return true
				}
			}
		}
		if err != nil {
			return false
		}
		copy(buf, text[n:])
	}
}

// sheetFile returns the name of a sheet's XML in the workbook.
func sheetFile(z *zip.Reader, sheet string) string {
	const folder = "xl"
	var book struct {
		Sheets []struct {
			Name string `xml:"name,attr"`
			ID   string `xml:"id,attr"`
		} `xml:"sheets>sheet"`
	}
	var links struct {
		List []struct {
			ID     string `xml:"Id,attr"`
			Target string `xml:"Target,attr"`
		} `xml:"Relationship"`
	}
	if !decodeIn(z, folder+"/workbook.xml", &book) || !decodeIn(z, folder+"/_rels/workbook.xml.rels", &links) {
		return ""
	}
	for _, s := range book.Sheets {
		for _, l := range links.List {
			if s.Name == sheet && s.ID == l.ID {
				if target, ok := strings.CutPrefix(l.Target, "/"); ok {
					return target
				}
				return path.Join(folder, l.Target)
			}
		}
	}
	return ""
}

func decodeIn(z *zip.Reader, name string, to any) bool {
	in := openIn(z, name)
	if in == nil {
		return false
	}
	defer in.Close()
	return xml.NewDecoder(in).Decode(to) == nil
}
