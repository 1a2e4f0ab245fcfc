package tidy

import (
	"bytes"
	"encoding/json"
	"fmt"
	"path"
	"slices"
	"strings"
)

// packageID is the name in every datapackage.json of ours; an old folder is
// known by it.
const packageID = "kindwell-results"

// The parts of a Data Package (Frictionless Data Package, version 2) that
// describe a results folder.
type (
	dataPackage struct {
		Schema      string     `json:"$schema"`
		Name        string     `json:"name"`
		Title       string     `json:"title,omitempty"`
		Description string     `json:"description"`
		Resources   []resource `json:"resources"`
	}
	resource struct {
		Name        string       `json:"name"`
		Path        string       `json:"path"`
		Title       string       `json:"title,omitempty"`
		Description string       `json:"description,omitempty"`
		Type        string       `json:"type,omitempty"`
		Format      string       `json:"format,omitempty"`
		MediaType   string       `json:"mediatype,omitempty"`
		Encoding    string       `json:"encoding,omitempty"`
		Bytes       *int64       `json:"bytes,omitempty"`
		Hash        string       `json:"hash,omitempty"`
		Schema      *tableSchema `json:"schema,omitempty"`
	}
	tableSchema struct {
		Schema        string        `json:"$schema"`
		Fields        []schemaField `json:"fields"`
		MissingValues []string      `json:"missingValues"`
		PrimaryKey    []string      `json:"primaryKey,omitempty"`
	}
	schemaField struct {
		Name        string            `json:"name"`
		Type        string            `json:"type"`
		Unit        string            `json:"unit,omitempty"`
		Description string            `json:"description"`
		Constraints *fieldConstraints `json:"constraints,omitempty"`
	}
	fieldConstraints struct {
		Required bool     `json:"required,omitempty"`
		Minimum  *float64 `json:"minimum,omitempty"`
		Maximum  *float64 `json:"maximum,omitempty"`
		Enum     []string `json:"enum,omitempty"`
	}
)

// describe returns datapackage.json: the tables in the order of the manual,
// then the other files by name. Equal contents give equal bytes, whatever the
// order of writing; the record of the run is listed without size and hash.
func (f *Folder) describe() ([]byte, error) {
	p := dataPackage{
		Schema:      "https://datapackage.org/profiles/2.0/datapackage.json",
		Name:        packageID,
		Title:       f.Title,
		Description: "Results of a kindwell study: tidy tables, one header line, one row an observation, missing values as empty cells.",
		Resources:   []resource{},
	}
	files := slices.Clone(f.files)
	order := Tables()
	slices.SortFunc(files, func(a, b written) int {
		if a.table != nil && b.table != nil {
			return slices.Index(order, a.table) - slices.Index(order, b.table)
		}
		if (a.table == nil) != (b.table == nil) {
			if a.table != nil {
				return -1
			}
			return 1
		}
		return strings.Compare(a.path, b.path)
	})
	used := map[string]bool{}
	for _, file := range files {
		r := file.describe()
		if used[r.Name] {
			return nil, fmt.Errorf("two files would have the name %s in %s", r.Name, PackageName)
		}
		used[r.Name] = true
		p.Resources = append(p.Resources, r)
	}
	var text bytes.Buffer
	encoder := json.NewEncoder(&text)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", "  ")
	if err := encoder.Encode(p); err != nil {
		return nil, err
	}
	return text.Bytes(), nil
}

// describe returns the resource of one file.
func (w written) describe() resource {
	if w.table == nil {
		r := resource{
			Name:      strings.ToLower(strings.ReplaceAll(w.path, "/", "_")),
			Path:      w.path,
			MediaType: mediaType(w.path),
		}
		if w.path != RecordName {
			r.Bytes, r.Hash = &w.bytes, "sha256:"+w.hash
		}
		return r
	}
	return resource{
		Name:        w.table.Name,
		Path:        w.path,
		Title:       w.table.Title,
		Description: w.table.Description,
		Type:        "table",
		Format:      "csv",
		MediaType:   "text/csv",
		Encoding:    "utf-8",
		Bytes:       &w.bytes,
		Hash:        "sha256:" + w.hash,
		Schema:      w.table.schema(),
	}
}

// schema returns the table's declaration as a Table Schema.
func (t *Table) schema() *tableSchema {
	s := &tableSchema{
		Schema:        "https://datapackage.org/profiles/2.0/tableschema.json",
		MissingValues: []string{""},
		PrimaryKey:    t.PrimaryKey(),
	}
	for _, c := range t.Columns {
		field := schemaField{Name: c.Name, Type: c.Kind.String(), Unit: c.Unit, Description: c.Description}
		limits := fieldConstraints{Minimum: c.Minimum, Maximum: c.Maximum, Enum: c.Enum}
		limits.Required = c.Key || c.Kind == Integer || c.Kind == Boolean
		if limits.Required || limits.Minimum != nil || limits.Maximum != nil || limits.Enum != nil {
			field.Constraints = &limits
		}
		s.Fields = append(s.Fields, field)
	}
	return s
}

// mediaType tells the type of the files a results folder holds beside its
// tables; machine settings have no say in it.
func mediaType(name string) string {
	switch path.Ext(name) {
	case ".json":
		return "application/json"
	case ".yaml":
		return "application/yaml"
	case ".html":
		return "text/html"
	case ".svg":
		return "image/svg+xml"
	case ".png":
		return "image/png"
	case ".csv":
		return "text/csv"
	case ".md":
		return "text/markdown"
	case ".txt":
		return "text/plain"
	default:
		return "application/octet-stream"
	}
}
