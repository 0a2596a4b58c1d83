package session

import (
	"fmt"
	"path"
	"strings"

	"bandwright/assets"
	"bandwright/ui/doc"
)

// Example is a study that comes with the program.
type Example struct {
	Name     string // of its file, without ending
	Title    string // the question it answers
	Document doc.Document
}

// Examples returns the example studies, ordered by name.
func Examples() ([]Example, error) {
	entries, err := assets.Studies.ReadDir("studies")
	if err != nil {
		return nil, fmt.Errorf("example studies: %w", err)
	}
	var out []Example
	for _, entry := range entries {
		if path.Ext(entry.Name()) != ".bandstudy" {
			continue
		}
		data, err := assets.Studies.ReadFile(path.Join("studies", entry.Name()))
		if err != nil {
			return nil, fmt.Errorf("example studies: %w", err)
		}
		d, err := doc.Decode(entry.Name(), data)
		if err != nil {
			return nil, err
		}
		out = append(out, Example{Name: strings.TrimSuffix(entry.Name(), path.Ext(entry.Name())), Title: d.Title, Document: d})
	}
	return out, nil
}
