package chain3

import (
	"math"
	"testing"
)

// TestResponseExact compares the states and their derivatives with proven values, whose
// digits are all right but for the rounding of the last one.
func TestResponseExact(t *testing.T) {
	bounds, slopes := ResponseState{Y1: 7.3e-16, Y2: 4.8e-16, Y3: 6.2e-16}, ResponseState{Y1: 1.5e-15, Y2: 1.1e-15, Y3: 1.3e-15}
	for _, c := range []struct {
		at          float64
		want, rates ResponseState
	}{
		{0, ResponseState{Y1: 1.0000000000000000000, Y2: 0, Y3: 0}, ResponseState{Y1: -2.0000000000000000000, Y2: 1.0000000000000000000, Y3: 0}},
		{0.0087890625, ResponseState{Y1: 0.98261342025454586058, Y2: 0.0086361395773714099732, Y3: 0.000037951296645490626791}, ResponseState{Y1: -1.9565907009317203112, Y2: 0.96537909239644853126, Y3: 0.0085602369840804287196}},
		{0.140625, ResponseState{Y1: 0.76232785778363828091, Y2: 0.10685041879615562109, Y3: 0.0074882557946309435808}, ResponseState{Y1: -1.4178052967711209407, Y2: 0.55611527598595798230, Y3: 0.091873907206893733931}},
		{1.125, ResponseState{Y1: 0.18740854519712516561, Y2: 0.17532397139500809595, Y3: 0.082009320635260828823}, ResponseState{Y1: -0.19949311899924223527, Y2: -0.081230076957630197466, Y3: 0.011305330124486438301}},
		{2.25, ResponseState{Y1: 0.072585986429677540643, Y2: 0.094470820405002742290, Y3: 0.061476989891435234147}, ResponseState{Y1: -0.050701152454352338996, Y2: -0.054878664488892709790, Y3: -0.028483159377867726004}},
		{3.375, ResponseState{Y1: 0.035207919708531186170, Y2: 0.048956580242602885763, Y3: 0.034037040087740011769}, ResponseState{Y1: -0.021459259174459486577, Y2: -0.028668200688934573587, Y3: -0.019117499932877137775}},
		{4.5, ResponseState{Y1: 0.017972881620075244543, Y2: 0.025330078717983960393, Y3: 0.017849471815988564994}, ResponseState{Y1: -0.010615684522166528693, Y2: -0.014837803999904111249, Y3: -0.010368864913993169594}},
		{5.625, ResponseState{Y1: 0.0092730646513310324540, Y2: 0.013104893018691899797, Y3: 0.0092600573536769648330}, ResponseState{Y1: -0.0054412362839701651114, Y2: -0.0076766640323758023062, Y3: -0.0054152216886620298694}},
		{6.75, ResponseState{Y1: 0.0047948644571872145425, Y2: 0.0067799928613239233495, Y3: 0.0047934934981008304581}, ResponseState{Y1: -0.0028097360530505057354, Y2: -0.0039716277673598016985, Y3: -0.0028069941348777375667}},
		{7.875, ResponseState{Y1: 0.0024804049920647627997, Y2: 0.0035077202029347231199, Y3: 0.0024802604940401518752}, ResponseState{Y1: -0.0014530897811948024795, Y2: -0.0020547749197645315648, Y3: -0.0014528007851455806306}},
		{9, ResponseState{Y1: 0.0012832410056982726217, Y2: 0.0018147660647978789983, Y3: 0.0012832257757185279090}, ResponseState{Y1: -0.00075171594659866624497, Y2: -0.0010630653481789574660, Y3: -0.00075168548663917681971}},
	} {
		got, rates := Response(c.at), ResponseRates(c.at)
		if many := ResponseValues(nil, []float64{c.at}); len(many) != 1 || many[0] != got {
			t.Errorf("ResponseValues gives %v at %v, not %v", many, c.at, got)
		}
		for _, x := range []struct {
			name             string
			got, want, bound float64
		}{
			{"Y1", got.Y1, c.want.Y1, bounds.Y1},
			{"rate of Y1", rates.Y1, c.rates.Y1, slopes.Y1},
			{"Y2", got.Y2, c.want.Y2, bounds.Y2},
			{"rate of Y2", rates.Y2, c.rates.Y2, slopes.Y2},
			{"Y3", got.Y3, c.want.Y3, bounds.Y3},
			{"rate of Y3", rates.Y3, c.rates.Y3, slopes.Y3},
		} {
			if e := math.Abs(x.got - x.want); !(e <= x.bound+0x1p-52*math.Abs(x.want)+math.SmallestNonzeroFloat64) {
				t.Errorf("%s at %v is %v, exactly %v: an error of %g", x.name, c.at, x.got, x.want, e)
			}
		}
	}
}
