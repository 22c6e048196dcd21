package main

import (
	"strings"
	"unicode/utf8"
)

// table lays out rows of cells: the first column flush left, the others flush right.
type table struct {
	rows [][]string
}

func (t *table) row(cells ...string) { t.rows = append(t.rows, cells) }

// String returns the table, indented by two spaces.
func (t *table) String() string {
	var widths []int
	for _, row := range t.rows {
		for i, cell := range row {
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], utf8.RuneCountInString(cell))
		}
	}
	var out strings.Builder
	for _, row := range t.rows {
		line := " "
		for i, cell := range row {
			line += " " + pad(cell, widths[i], i == 0) + " "
		}
		out.WriteString(strings.TrimRight(line, " ") + "\n")
	}
	return out.String()
}

func pad(cell string, width int, left bool) string {
	space := strings.Repeat(" ", width-utf8.RuneCountInString(cell))
	if left {
		return cell + space
	}
	return space + cell
}

// unlessBare returns the table, or nothing where it has no rows below its heading.
func (t *table) unlessBare() string {
	if len(t.rows) < 2 {
		return ""
	}
	return t.String()
}
