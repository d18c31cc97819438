package workbook

import (
	"testing"

	"slowpoint/model"
)

// TestLoosely: stages are known by both of their words, with any of the signs before their time.
func TestLoosely(t *testing.T) {
	for _, typed := range []string{"hold hot 09:12; chill 11:20; end 13:00", "Hold hot: 09:12; chill=11:20", "hold hot; chill, 2 h"} {
		p, err := loosely(typed)
		if err != nil || len(p.Steps) != 2 || p.Steps[0].Stage != model.HoldHot || p.Steps[1].Stage != model.Cool || p.Steps[1].Name != "chill" {
			t.Errorf("%q: %+v, %v", typed, p, err)
		}
	}
	for _, typed := range []string{"cooling 09:12", "hold 09:12", "end 09:12"} {
		if _, err := loosely(typed); err == nil {
			t.Errorf("%q is taken", typed)
		}
	}
}
