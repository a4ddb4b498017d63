package exposure_test

import (
	"context"
	"fmt"
	"math"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

// A site made in code: one sector antenna over a flat roof and one row of a limit
// table. What a table's blank cells stand for is written out here.
func Example() {
	const deg = math.Pi / 180
	pattern, err := antenna.TwoBeamwidth(65*deg, 7*deg, 30, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	table, faults, _ := limits.New([]limits.Row{{
		Class: "public", Quantity: limits.S, FromHz: 400e6, ToHz: 300e9, Coefficient: 10, AverageS: 1800,
		Source: "an invented level",
	}}, limits.About{}, nil)
	if len(faults) > 0 {
		fmt.Println(faults)
		return
	}
	site := &exposure.Site{
		Sources: []exposure.Source{{
			ID: "A1", Transmitter: "T1", State: exposure.On,
			Position: exposure.Point{X: 10, Y: 2, Z: 2},
			Pose:     antenna.Pose{TiltRad: 2 * deg},
			Pattern:  pattern, PatternKind: exposure.PatternBeamwidth, Gain: antenna.GainFromDBi(17),
			FrequencyHz: 2100e6, Method: exposure.MethodFarField,
			Power: exposure.Power{TransmitterW: 80, Loss: 1, Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1},
		}},
		Surfaces: []exposure.Surface{{
			ID: "roof", Class: "public", From: 0, To: 2,
			Outline: []exposure.Ring{{{0, 0}, {20, 0}, {20, 20}, {0, 20}, {0, 0}}},
		}},
		Limits: table,
	}
	model, err := exposure.New(site, exposure.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	ctx := context.Background()

	door := exposure.Place{ID: "door", At: exposure.Point{X: 10, Y: 14}, To: 2, Class: "public"}
	points, err := model.Field(ctx, []exposure.Place{door})
	if err != nil {
		fmt.Println(err)
		return
	}
	r := points[0].Ratios[0]
	fmt.Printf("door: exposure ratio %.2f, %s the limits supplied\n", r.ExposureRatio, r.Verdict)

	distances, err := model.Distances(ctx, exposure.DistanceQuery{Rows: true})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s, %s: %.1f m\n", distances[0].Antenna, distances[0].Direction, distances[0].DistanceM)

	zones, err := model.Zones(ctx, exposure.ZoneQuery{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("roof: %.0f m2 inside the keep-out line\n", zones[0].OuterAreaM2)
	// Output:
	// door: exposure ratio 0.22, within the limits supplied
	// A1, front: 5.7 m
	// roof: 20 m2 inside the keep-out line
}
