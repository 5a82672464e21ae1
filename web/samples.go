package web

import (
	"fmt"

	"lossbook/assets"
	"lossbook/store"
)

// Samples returns the designs a first start begins with, as the store keeps
// them.
func Samples() ([]store.NewDesign, error) {
	var designs []store.NewDesign
	for _, sample := range assets.Samples() {
		d, wrong, err := decodeDesign(sample.JSON)
		if err != nil || len(wrong) > 0 {
			return nil, fmt.Errorf("sample %s: %v%v", sample.Name, wrong, err)
		}
		draft, complete, err := keptAs(d)
		if err != nil {
			return nil, fmt.Errorf("sample %s: %w", sample.Name, err)
		}
		designs = append(designs, store.NewDesign{Name: d.Name, Sample: true, Draft: draft, Complete: complete})
	}
	return designs, nil
}
