package rules

import (
	"strings"
	"testing"

	"slowpoint/model"
)

// TestUncooled judges a limit on cooling where the process has no chill for it: out of order, under another stage, or none at all.
func TestUncooled(t *testing.T) {
	cool := Limit{Kind: CoolWithin, FromC: c(57), ToC: c(21), TimeS: min_(120), Clock: crossing, Stages: st(model.Cool)}
	after := Limit{Kind: CoolWithin, ToC: c(21), TimeS: min_(120), Clock: after(model.Cook), Stages: st(model.Cool)}
	whole := cool
	whole.Stages = nil
	end := Limit{Kind: ByTheEnd, ToC: c(8), Stages: st(model.Cool)}
	named := cool
	named.Applies = Applies{Product: "P"}
	advice := cool
	advice.Advice = true
	for _, x := range []struct {
		name, spans, course string
		l                   Limit
		want                Verdict
		why, warm           string
	}{
		{"chilled before it is cooked", "cool 0-90, cook 90-150, rest 150-160", "0:4 90:3 150:92.04 160:88.3", cool, CannotTell, "above 57 °C (up to 92.1 °C, at the end 88.3 °C), but the stage cool does not come after that", ""},
		{"chilled before it is cooked, clock from the cook", "cool 0-90, cook 90-150, rest 150-160", "0:4 90:3 150:92 160:88", after, CannotTell, "above 21 °C (up to 92 °C", ""},
		{"chilled in a store", "cook 0-60, store 60-300", "0:4 60:92 300:5", cool, CannotTell, "chills food that was above 57 °C (up to 92 °C) in its stage store", ""},
		{"chilled in a store, by the end", "cook 0-60, store 60-300", "0:4 60:92 300:5", end, CannotTell, "above 8 °C (up to 92 °C) in its stage store", ""},
		{"cooked and served", "cook 0-60, rest 60-70", "0:4 60:92 70:88.3", cool, NotApplicable, "no stage cool", "above 57 °C (up to 92 °C), is at 88.3 °C at the end"},
		{"stored raw, cooked and served", "store 0-50, cook 50-110, hold hot 110-140", "0:4 50:3 110:80 140:76", cool, NotApplicable, "no stage cool", "is at 76 °C at the end"},
		{"the whole chain, cooked and served", "cook 0-60, rest 60-70", "0:4 60:92 70:88", whole, NotApplicable, "was above 57 °C (up to 92 °C) and never fell to it", "is at 88 °C"},
		{"never warm", "thaw 0-60, hold cold 60-90", "0:2 60:7 90:4", cool, NotApplicable, "no stage cool", ""},
		{"chilled, then reheated and served", "cook 0-60, cool 60-180, reheat 180-220", "0:4 60:92 150:20 180:4 220:80", cool, Met, "took", ""},
		{"a limit for this very product", "cook 0-60, rest 60-70", "0:4 60:92 70:88", named, CannotTell, "names this very product", ""},
		{"advice", "cool 0-90, cook 90-150", "0:4 90:3 150:92", advice, NotApplicable, "Nothing was above", ""},
		{"a cook is lacking, and not a chill", "cool 0-90, hold cold 90-150", "0:20 90:4 150:4", after, NotApplicable, "no stage cook", ""},
		{"a cook is lacking, and the chill comes last", "reheat 0-60, cool 60-400", "0:4 60:80 400:4", after, NotApplicable, "no stage cook", ""},
		{"delivered a little warm, stored, cooked and served", "store 0-50, cook 50-110, hold hot 110-140", "0:9 50:3 110:80 140:76", end, NotApplicable, "no stage cool", "is at 76 °C at the end"},
		{"delivered a little warm and stored", "store 0-50", "0:9 50:3", end, NotApplicable, "no stage cool", ""},
		{"warmed again before it had cooled", "cook 0-60, cool 60-180, reheat 180-220", "0:4 60:92 180:70 220:80", cool, CannotTell, "was warmed again after the stage cool", ""},
		{"warmed again in the whole chain", "cook 0-60, store 60-180, reheat 180-220", "0:4 60:92 180:70 220:80", whole, CannotTell, "was warmed again after the stage store", ""},
		{"cooked gently, chilled, reheated and served", "cook 0-60, cool 60-180, reheat 180-220", "0:4 60:55 180:3 220:75", cool, NotApplicable, "", "is at 75 °C at the end"},
	} {
		t.Run(x.name, func(t *testing.T) {
			f := one(t, x.l, record(t, x.spans, x.course))
			if f.Verdict != x.want || !strings.Contains(f.Why, x.why) || !strings.Contains(f.StillWarm, x.warm) || (x.warm == "") != (f.StillWarm == "") {
				t.Errorf("%v: %s (%s)", f.Verdict, f.Why, f.StillWarm)
			}
		})
	}
}
