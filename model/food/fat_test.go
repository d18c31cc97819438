package food

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model"
)

// The share of fat goes with the material, scaled as the composition is; butter is refused by it where its fat sets, and no built-in food is.
func TestFatGoesWithTheMaterial(t *testing.T) {
	butter, err := Compose("Butter", "invented by the test", Composition{WaterPc: 16, FatPc: 81, ProteinPc: 1, AshPc: 1})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(butter.FatPc-100*81/99.0) > 1e-9 {
		t.Errorf("butter has %g %% of fat", butter.FatPc)
	}
	film := 20.0
	chill := []model.Step{{Name: "chill", Stage: model.Cool, DurationS: 6 * 3600,
		Exposure: model.Exposure{Surface: model.Film, FilmW: &film, Medium: model.Course{C: []float64{2}}}}}
	solve := func(m *model.Material) error {
		_, err := model.Solve(model.Product{Name: "piece", Shape: model.Slab, Size: model.Size{ThicknessM: 0.05}, Food: m, StartC: 57}, chill, model.Options{})
		return err
	}
	butter.Flow, butter.FreezingC = model.FlowsNo, nil
	if err := solve(&butter); err == nil || !strings.Contains(err.Error(), "its fat sets and melts") {
		t.Errorf("butter is chilled: %v", err)
	}
	for _, name := range []string{"Cheese, cream", "Cheese, cheddar"} {
		m, ok := Named(name)
		if !ok {
			t.Fatalf("%s is not built in", name)
		}
		if err := solve(m); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}
