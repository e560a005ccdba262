package main

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"
)

func TestWrongUsageSaysWhatIsLegal(t *testing.T) {
	dir := t.TempDir()
	csv := write(t, dir, "long.csv", longCSV(2))
	set := filepath.Join(dir, "set")
	grow := func(more ...string) []string {
		return append([]string{"grow", csv, "--rate", "50", "--out", set}, more...)
	}
	for _, tc := range []struct {
		name string
		args []string
		says []string
	}{
		{"unknown command", []string{"plant"}, []string{"plant"}},
		{"unknown flag", grow("--speed", "3"), []string{"--speed", "-h"}},
		{"not a number", grow("--knots", "many"), []string{"knots", "many"}},
		{"no recordings", []string{"grow", "--out", set}, []string{"no recordings"}},
		{"no out", []string{"grow", csv, "--rate", "50"}, []string{"--out"}},
		{"no rate", []string{"grow", csv, "--out", set}, []string{"--rate", "long.csv"}},
		{"method", grow("--method", "magic"), []string{"--method", "recipe, path"}},
		{"distance", grow("--distance", "taxi"), []string{"--distance", "dtw-independent"}},
		{"normalise", grow("--normalise", "max"), []string{"--normalise", "none, z"}},
		{"protocol", grow("--protocol", "best"), []string{"--protocol", "given, subject, session, pooled"}},
		{"table", grow("--tables", "rows"), []string{"--tables", "takes, frames and windows"}},
		{"band", grow("--band", "2"), []string{"--band"}},
		{"spread", grow("--spread", "0.5"), []string{"--spread", "1/3"}},
		{"knots", grow("--knots", "1"), []string{"--knots", "3 or more"}},
		{"trim", grow("--trim", "-1"), []string{"--trim", "between 0 and"}},
		{"workers", grow("--workers", "0"), []string{"--workers", "1 or more"}},
		{"per take", grow("--per-take", "-1"), []string{"--per-take"}},
		{"unit", grow("--unit", "left.*=furlong"), []string{"--unit", "m/s^2"}},
		{"unit of another quantity", grow("--unit", "left.*=mm"), []string{"mm", "ACCEL"}},
		{"unit that matches nothing", grow("--unit", "c9=g"), []string{"c9", "left.accel.x"}},
		{"group that matches nothing", grow("--group", "a=c9"), []string{"c9", "left.accel.x"}},
		{"group that leaves channels", grow("--group", "a=left.*"), []string{"right.accel.x"}},
		{"group without channels", grow("--group", "a"), []string{"--group", "NAME=CHANNELS"}},
		{"pattern", grow("--pattern", "{who}.csv"), []string{"who", "subject"}},
		{"hold out nobody", grow("--hold-out", "subject=ann"), []string{"--hold-out", "ember, pim, wick"}},
		{"hold out a lot", grow("--hold-out", "1.5"), []string{"--hold-out", "between 0 and 1"}},
		{"no plan", []string{"grow", "--plan", filepath.Join(dir, "none.toml")}, []string{"none.toml"}},
		{"verify nothing", []string{"verify"}, []string{"arg"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			o := strandwise(t, "", tc.args...)
			if o.code != exitUsage {
				t.Errorf("exit code %d, want %d\n%s", o.code, exitUsage, o.err)
			}
			checkSays(t, o, tc.says...)
			checkAbsent(t, set)
		})
	}
}

func TestPlanErrorsNameTheLine(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "long.csv", longCSV(2))
	for _, tc := range []struct {
		name, plan string
		says       []string
	}{
		{"unknown key", "rate = 50\nspeed = 3\n", []string{"line 2", "speed", "per_take"}},
		{"not TOML", "rate = 50\n\nout = \n", []string{"line 3"}},
		{"another type", "rate = 50\nseed = \"x\"\n", []string{"line 2", "seed"}},
		{"impossible value", "# a plan\nrate = 50\nspread = 0.9\n", []string{"line 3", "spread", "1/3"}},
		{"unknown name", "rate = 50\ndistance = [\n  \"taxi\",\n]\n", []string{"line 2", "distance", "dtw-dependent"}},
		{"no such channel", "rate = 50\nunit = [\"c9=g\"]\n", []string{"line 2", "c9"}},
		{"no such file", "recordings = [\"*.tsv\"]\n", []string{"line 1", "tsv"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			text := tc.plan + "out = \"set\"\n"
			if !strings.Contains(text, "recordings") {
				text += "recordings = [\"long.csv\"]\n"
			}
			plan := write(t, dir, "plan.toml", text)
			o := strandwise(t, "", "grow", "--plan", plan)
			if o.code != exitUsage {
				t.Errorf("exit code %d, want %d\n%s", o.code, exitUsage, o.err)
			}
			checkSays(t, o, append(tc.says, "plan.toml")...)
			checkAbsent(t, filepath.Join(dir, "set"))
		})
	}
}

func TestFlagsWinOverThePlan(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "long.csv", longCSV(2))
	plan := write(t, dir, "plan.toml", "recordings = [\"long.csv\"]\nrate = 50\nper_take = 3\nseed = 9\ndistance = [\"dtw-dependent\"]\n")
	out := must(t, "score", "--plan", plan, "--per-take", "2", "--distance", "euclidean-dependent,euclidean-independent", "--json")
	var got struct {
		Seed    int
		PerTake int `json:"per_take"`
		Results []struct{ Distance string }
	}
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatal(err)
	}
	if got.Seed != 9 || got.PerTake != 2 || len(got.Results) != 4 || got.Results[0].Distance != "euclidean-dependent" {
		t.Errorf("a plan of seed 9 and 3 takes of dtw-dependent, with flags for 2 takes of two distances, gave %+v", got)
	}
}

func TestHelpOfEveryCommandShowsAnExample(t *testing.T) {
	for _, name := range []string{"demo", "check", "grow", "score", "verify", "convert"} {
		if out := must(t, name, "-h"); !strings.Contains(out, "strandwise "+name+" ") {
			t.Errorf("%s -h shows no example:\n%s", name, out)
		}
	}
}
