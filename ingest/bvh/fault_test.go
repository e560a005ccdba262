package bvh_test

import (
	"errors"
	"strings"
	"testing"

	"strandwise/ingest/bvh"
	"strandwise/ingest/fault"
	"strandwise/ingest/raw"
)

// TestFaults damages a sound file, one line each, and wants the line named.
func TestFaults(t *testing.T) {
	const sound = `HIERARCHY
ROOT Hips
{
OFFSET 0 0 0
CHANNELS 4 Xposition Zrotation Xrotation Yrotation
JOINT Neck
{
OFFSET 0 10 0
CHANNELS 1 Yrotation
End Site
{
OFFSET 0 5 0
}
}
}
MOTION
Frames: 2
Frame Time: 0.01
1 2 3 4 5
6 7 8 9 10
`
	decode(t, sound, bvh.Format{LengthUnit: "m"})
	for _, c := range []struct {
		name, from, to string
		line           int
		want           string
	}{
		{"empty", sound, "", 0, "ends before the word MOTION"},
		{"other file", "HIERARCHY", "time,x", 1, "does not begin with the word HIERARCHY"},
		{"no root", sound[10:strings.Index(sound, "MOTION")], "", 2, "no ROOT"},
		{"joint first", "ROOT", "JOINT", 2, "JOINT stands outside"},
		{"root within", "JOINT", "ROOT", 6, "ROOT stands inside joint Hips"},
		{"no name", "JOINT Neck", "JOINT", 6, "JOINT has no name"},
		{"same name", "Neck", "Hips", 6, "two joints are named Hips, the first at line 2"},
		{"no brace", "Hips\n{", "Hips", 3, `joint Hips is followed by "OFFSET"`},
		{"words before the brace", "Hips\n{", "Hips\nat rest {", 3, `joint Hips is followed by "at"`},
		{"unclosed", "}\n}\n}\nM", "}\n}\nM", 15, "MOTION begins inside joint Hips"},
		{"closed twice", "}\n}\n}\n", "}\n}\n}\n}\n", 16, "} closes no joint"},
		{"no offset", "OFFSET 0 5 0\n", "", 12, "End Site of Neck has no OFFSET"},
		{"two offsets", "OFFSET 0 10 0", "OFFSET 0 10 0 OFFSET 1 1 1", 8, "joint Neck has two OFFSET lines"},
		{"offset outside", "ROOT", "OFFSET 0 0 0\nROOT", 2, "OFFSET stands outside"},
		{"short offset", "OFFSET 0 10 0", "OFFSET 0 10", 9, `"CHANNELS" is not a number`},
		{"long offset", "OFFSET 0 10 0", "OFFSET 0 10 0 0", 8, `"0" is not expected here`},
		{"offset no number", "OFFSET 0 10 0", "OFFSET 0 ten 0", 8, `"ten" is not a number`},
		{"offset not finite", "OFFSET 0 10 0", "OFFSET 0 nan 0", 8, `"nan" is not a finite number`},
		{"offset out of range", "OFFSET 0 10 0", "OFFSET 0 1e10 0", 8, "beyond any angle or length"},
		{"offset after child", "OFFSET 0 0 0\nC", "JOINT A { OFFSET 0 0 0 } OFFSET 0 0 0\nC", 4, "OFFSET of joint Hips comes after its children"},
		{"two channel lines", "CHANNELS 1", "CHANNELS 0 CHANNELS 1", 9, "joint Neck has two CHANNELS lines"},
		{"channels after child", "CHANNELS 4", "JOINT A { OFFSET 0 0 0 } CHANNELS 4", 5, "CHANNELS of joint Hips comes after its children"},
		{"channels of an end site", "OFFSET 0 5 0", "OFFSET 0 5 0 CHANNELS 0", 12, "end site has CHANNELS"},
		{"no count", "CHANNELS 1", "CHANNELS", 9, `states "Yrotation" as its number of channels`},
		{"negative count", "CHANNELS 1", "CHANNELS -1", 9, `states "-1"`},
		{"huge count", "CHANNELS 1", "CHANNELS 99999999999999999999", 9, "number of channels"},
		{"too few channels", "CHANNELS 4", "CHANNELS 5", 6, `joint Hips has "JOINT" where a channel should stand`},
		{"too many channels", "CHANNELS 4", "CHANNELS 3", 5, `"Yrotation" is not expected here`},
		{"unknown channel", "CHANNELS 1 Yrotation", "CHANNELS 1 Wrotation", 9, `"Wrotation" where a channel should stand`},
		{"same move twice", "Xposition Zrotation", "Xposition xposition", 5, "channel Xposition twice"},
		{"end of what", "End Site", "End Point", 10, `End is followed by "Point"`},
		{"end outside", "ROOT", "End Site { OFFSET 0 0 0 }\nROOT", 2, "End Site stands outside"},
		{"joint in an end site", "OFFSET 0 5 0", "OFFSET 0 5 0 JOINT A", 12, "end site has a joint in it"},
		{"end in an end site", "OFFSET 0 5 0", "OFFSET 0 5 0 End Site", 12, "end site has a joint in it"},
		{"unknown word", "JOINT", "JIONT", 6, `"JIONT" is not expected here; legal words are ROOT`},
		{"long unknown word", "JOINT", strings.Repeat("x", 1000), 6, "…"},
		{"no motion", sound[strings.Index(sound, "MOTION"):], "", 15, "ends before the word MOTION"},
		{"words after MOTION", "MOTION\n", "MOTION ", 16, `MOTION is followed by "Frames:"`},
		{"nothing after MOTION", sound[strings.Index(sound, "Frames"):], "", 16, "ends before the line Frames"},
		{"no frames line", "Frames: 2\n", "", 17, "the line Frames: is missing"},
		{"no frame time", "Frame Time: 0.01\n", "", 18, `the line Frame Time: is missing; "1 2 3 4 5"`},
		{"frames no number", "Frames: 2", "Frames: two", 17, `"two" is no number of frames`},
		{"frames broken", "Frames: 2", "Frames: 2.0", 17, `"2.0" is no number of frames`},
		{"frames negative", "Frames: 2", "Frames: -2", 17, `"-2" is no number of frames`},
		{"frames none", "Frames: 2", "Frames: 0", 17, "holds no frames"},
		{"frames beyond memory", "Frames: 2", "Frames: 999999999999", 17, "can have"},
		{"frame time none", "Frame Time: 0.01", "Frame Time: 0", 18, "Frame Time is 0 s"},
		{"frame time negative", "Frame Time: 0.01", "Frame Time: -0.01", 18, "Frame Time is -0.01 s"},
		{"frame time too small", "Frame Time: 0.01", "Frame Time: 1e-320", 18, "Frame Time is 1e-320 s"},
		{"frame time not finite", "Frame Time: 0.01", "Frame Time: NaN", 18, "not a finite number"},
		{"frame time comma", "Frame Time: 0.01", "Frame Time: 0,01", 18, "write numbers with a decimal point"},
		{"no channels", "CHANNELS 4 Xposition Zrotation Xrotation Yrotation\nJOINT Neck\n{\nOFFSET 0 10 0\nCHANNELS 1 Yrotation", "JOINT Neck\n{\nOFFSET 0 10 0", 14, "no joint of its hierarchy moves"},
		{"short row", "6 7 8 9 10", "6 7 8 9", 20, "has 4 numbers where the skeleton has 5 channels"},
		{"long row", "1 2 3 4 5", "1 2 3 4 5 6", 19, "has 6 numbers where the skeleton has 5 channels"},
		{"missing rows", "Frames: 2", "Frames: 3", 20, "ends after 2 of 3 frames"},
		{"more rows", "Frames: 2", "Frames: 1", 20, "more lines than the 1 frames it states"},
		{"value no number", "7 8", "7 x", 20, `channel Hips.Xrotation: "x" is not a number`},
		{"value not finite", "9 10", "9 NaN", 20, `channel Neck.Yrotation: "NaN" is not a finite number`},
		{"value infinite", "6 7", "-Inf 7", 20, "channel Hips.Xposition:"},
		{"value out of range", "1 2", "1e999 2", 19, `channel Hips.Xposition: "1e999" is beyond`},
		{"values with commas", "1 2 3 4 5", "1,5 2 3 4 5", 19, "decimal point"},
		{"binary", "JOINT", "\x00\xff", 6, `"\x00\xff" is not expected`},
		{"endless line", "1 2 3 4 5", strings.Repeat(" ", 17<<20), 19, "longer than 16 MiB"},
	} {
		t.Run(c.name, func(t *testing.T) {
			text := strings.Replace(sound, c.from, c.to, 1)
			if text == sound {
				t.Fatal("nothing is damaged")
			}
			m, err := bvh.Format{}.Decode(strings.NewReader(text), raw.Input{Name: "a.bvh"})
			var f *fault.Error
			if m != nil || !errors.As(err, &f) {
				t.Fatalf("motion %v, error %v", m, err)
			}
			if f.File != "a.bvh" || f.Line != c.line || !strings.Contains(err.Error(), c.want) || f.Remedy == "" {
				t.Errorf("%v; want line %d, %q", err, c.line, c.want)
			}
		})
	}
}

func TestTooManyJoints(t *testing.T) {
	text := "HIERARCHY\nROOT A { OFFSET 0 0 0\n" + strings.Repeat("End Site { OFFSET 0 0 0 }\n", 5000) + "}"
	_, err := bvh.Format{}.Decode(strings.NewReader(text), raw.Input{Name: "a.bvh"})
	var f *fault.Error
	if !errors.As(err, &f) || f.Line != 4098 || !strings.Contains(f.Problem, "4096 joints") {
		t.Errorf("%v", err)
	}
}
