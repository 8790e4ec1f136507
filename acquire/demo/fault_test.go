package demo

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestParseFault(t *testing.T) {
	for _, c := range []struct {
		text string
		want Fault
	}{
		{"detach@60s-90s:S2", Fault{Kind: "detach", FromS: 60, ToS: 90, Target: []string{"S2"}}},
		{"detach@60-90:S1,S2=0.05", Fault{"detach", 60, 90, []string{"S1", "S2"}, 0.05}},
		{"drive-off@1.5min:all", Fault{Kind: "drive-off", FromS: 90, Target: []string{"all"}}},
		{"knock@500ms:14z=-2", Fault{Kind: "knock", FromS: 0.5, Target: []string{"14z"}, Amount: -2}},
		{"lost@10s-10.25s", Fault{Kind: "lost", FromS: 10, ToS: 10.25}},
		{"lost@0=1e3", Fault{Kind: "lost", Amount: 1000}},
		{"gain@3s:a=b:c=2", Fault{Kind: "gain", FromS: 3, Target: []string{"a=b:c"}, Amount: 2}},
		{"mode-shift@20s:250=-3.5", Fault{Kind: "mode-shift", FromS: 20, Target: []string{"250"}, Amount: -3.5}},
	} {
		got, err := ParseFault(c.text)
		if err != nil || !reflect.DeepEqual(got, c.want) {
			t.Errorf("%s: %+v, %v: want %+v", c.text, got, err, c.want)
		}
	}
}

func TestParseFaultSaysWhatIsWrong(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", `no onset: write kind@from-to:target=amount, such as detach@60s-90s:S2`},
		{"detach:S2", `no onset: write kind@from-to:target=amount, such as detach@60s-90s:S2`},
		{"fall@60s:S2", `there is no kind "fall": choose detach, unhook, `},
		{"detach@:S2", `onset "" is no time: give one such as 60s, 500ms or 1.5min`},
		{"detach@60h:S2", `onset "60h" is no time: give one such as 60s, 500ms or 1.5min`},
		{"detach@nan:S2", `onset "nan" is no time: give one such as 60s, 500ms or 1.5min`},
		{"detach@1e3s:S2", `onset "1e3s" is no time: give one such as 60s, 500ms or 1.5min`},
		{"detach@60s-:S2", `end "" is no time: give one such as 60s, 500ms or 1.5min`},
		{"detach@60s-60s:S2", `end "60s" is not behind onset "60s": give a later end, or none`},
		{"detach@999999999s:S2", `onset "999999999s" is too late: give at most 1e+08s`},
		{"detach@60s", `target "": give forces, or all behind the colon`},
		{"detach@60s:S1,", `target "S1,": give forces, or all behind the colon`},
		{"tied@60s:S1", `target "S1": give two forces or more behind the colon`},
		{"twin@60s:a,b,c", `target "a,b,c": give two channels behind the colon`},
		{"lost@60s:S1", `target "S1": give nothing behind the colon`},
		{"gain@60s:S1=x", `amount "x" is no number: give one, or leave out = for the usual amount`},
		{"gain@60s:S1=NaN", `amount "NaN" is no number: give one, or leave out = for the usual amount`},
		{"gain@60s:S1=0", `amount 0 is no fault: leave out = for the usual amount`},
		{"gain@60s:S1=-1", `amount -1: give 0 to 1e+06 factor`},
		{"reverse@60s:S1=2", `amount 2: reverse has none: leave it out`},
		{"knock@60s-70s:14z", `a knock has no end: leave it out`},
		{"lost@60s-70s=5", `amount 5 frames with an end: keep one of them`},
	} {
		_, err := ParseFault(c.text)
		if err == nil || !strings.HasPrefix(err.Error(), `fault "`+c.text+`": `+c.want) {
			t.Errorf("%s: %v: want %s", c.text, err, c.want)
		}
	}
}

func TestFaultKindsAreSound(t *testing.T) {
	seen := make(map[string]bool)
	for i, k := range FaultKinds() {
		row := faultKinds[i]
		switch {
		case seen[k.Name]:
			t.Errorf("%s stands twice", k.Name)
		case k.Help == "" || strings.Contains(k.Help, "\n"):
			t.Errorf("%s: help %q: want one line", k.Name, k.Help)
		case k.Unit == "" && (k.Usual != 0 || row.hi != 0):
			t.Errorf("%s: an amount without a unit", k.Name)
		case k.Usual < row.lo || k.Usual > row.hi:
			t.Errorf("%s: the usual amount is out of bounds", k.Name)
		}
		seen[k.Name] = true
	}
}

func TestFaultStringIsReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.SampledFrom(faultKinds).Draw(t, "kind")
		f := Fault{Kind: k.name, FromS: rapid.Float64Range(0, 1e5).Draw(t, "from")}
		least, most := k.target.bounds()
		for range rapid.IntRange(least, min(most, 3)).Draw(t, "names") {
			f.Target = append(f.Target, rapid.StringMatching(`[A-Za-z0-9]{1,4}`).Draw(t, "name"))
		}
		if !k.once && rapid.Bool().Draw(t, "ends") {
			f.ToS = f.FromS + rapid.Float64Range(0.01, 100).Draw(t, "length")
		}
		if k.unit != "" && !(k.name == "lost" && f.ToS != 0) && rapid.Bool().Draw(t, "amount given") {
			f.Amount = rapid.Float64Range(k.lo, k.hi).Draw(t, "amount")
		}
		got, err := ParseFault(f.String())
		if err != nil || !reflect.DeepEqual(got, f) {
			t.Fatalf("%s: %+v, %v: want %+v", f.String(), got, err, f)
		}
	})
}

func FuzzParseFault(f *testing.F) {
	for _, text := range []string{
		"detach@60s-90s:S2", "knock@75s:14z=2", "tied@1min:S1,S2", "lost@10s-10.25s", "lost@0=1e3", "mode-shift@20s:all=-3",
		"", "@", "gain@1:=", "gain@1s:a==2", "level@.s:all", "level@-1:all", "skew@5ms-6ms:A=0.5",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		fault, err := ParseFault(text)
		if err != nil {
			if !reflect.DeepEqual(fault, Fault{}) {
				t.Fatalf("%q: %+v beside %v", text, fault, err)
			}
			return
		}
		if math.IsNaN(fault.FromS+fault.ToS+fault.Amount) || fault.FromS < 0 {
			t.Fatalf("%q: %+v", text, fault)
		}
		again, err := ParseFault(fault.String())
		if err != nil || !reflect.DeepEqual(again, fault) {
			t.Fatalf("%q: %+v, read back from %q as %+v, %v", text, fault, fault.String(), again, err)
		}
	})
}
