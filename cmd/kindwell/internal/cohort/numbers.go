package cohort

import (
	"fmt"
	"math"
	"strings"
)

// numberColumn is a column read as numbers: NaN where a cell is missing or bad.
type numberColumn struct {
	values []float64
	filled int       // cells that are not missing, the bad ones too
	bad    []badCell // cells that are neither numbers nor missing
	top    []badCell // cells like 89+, where they are allowed
	topOK  bool
}

// badCell is a cell kept for a message.
type badCell struct {
	row  int
	cell string
}

func newNumberColumn(rows int, topCoded bool) *numberColumn {
	return &numberColumn{values: make([]float64, 0, rows), topOK: topCoded}
}

// add reads one cell.
func (c *numberColumn) add(cell string, missing missingCells) {
	bare := trimmed(cell)
	if missing.text(bare) {
		c.values = append(c.values, math.NaN())
		return
	}
	v, why := parseNumber(bare)
	if why != "" && c.topOK {
		if top, ok := topCoded(bare); ok {
			c.top = append(c.top, badCell{len(c.values), bare})
			v, why = top, ""
		}
	}
	switch {
	case why != "":
		c.bad = append(c.bad, badCell{len(c.values), strings.Clone(cell)})
		c.filled++
		v = math.NaN()
	case missing.number(v):
		v = math.NaN()
	default:
		c.filled++
	}
	c.values = append(c.values, v)
}

// enough tells whether an Auto column holds numbers.
func (c *numberColumn) enough() bool {
	return float64(c.filled-len(c.bad)) >= autoShare*float64(c.filled)
}

// report turns the bad cells into faults: one by one, or in one when the column
// seems to hold no numbers at all.
func (c *numberColumn) report(g *grid, j int, typing typing, faults *collector) {
	address := func(b badCell, message string) *Fault {
		return &Fault{File: g.file, Row: g.line(b.row, j), Column: g.names[j], Value: b.cell, Message: message}
	}
	why := func(b badCell) string { _, why := parseNumber(trimmed(b.cell)); return why }
	if n := len(c.bad); n > 1 && 2*n > c.filled {
		first := c.bad[0]
		faults.add(address(first, fmt.Sprintf("%s; so with %d of the %d cells of this column, which has to hold numbers%s", why(first), n, c.filled, typing.numberHint)))
		return
	}
	for _, b := range c.bad {
		message := why(b)
		if g.columns[j].role == Auto {
			message += fmt.Sprintf("; %d of the %d cells of this column are numbers (if they are codes of categories, begin each with a letter)", c.filled-len(c.bad), c.filled)
		}
		faults.add(address(b, message))
	}
	if len(c.top) > 0 && typing.warn != nil {
		lines := make([]int, len(c.top))
		for k, b := range c.top {
			lines[k] = g.line(b.row, j)
		}
		typing.warn(g.names[j], fmt.Sprintf("%s, %s: %s like %s, taken as the number before the plus",
			g.file, lineList(lines), plural(len(c.top), "cell", "cells"), c.top[0].cell))
	}
}

// lineList prints up to ten lines: row 3; rows 3, 9 and 12; rows 1, 2, ... and
// 5 more.
func lineList(lines []int) string {
	const limit = 10
	if len(lines) == 1 {
		return fmt.Sprintf("row %d", lines[0])
	}
	list := "rows "
	for k, line := range lines[:min(len(lines), limit)] {
		switch {
		case k == 0:
		case k == len(lines)-1:
			list += " and "
		default:
			list += ", "
		}
		list += fmt.Sprint(line)
	}
	if more := len(lines) - limit; more > 0 {
		list += fmt.Sprintf(" and %d more", more)
	}
	return list
}
