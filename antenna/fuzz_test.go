package antenna

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
)

// holds reads arbitrary bytes: no panic, every error is a *ReadError that says
// something, what is accepted answers everywhere within its bounds, and two cuts
// survive being written and read again.
func holds(t *testing.T, read func([]byte, ReadOptions) (*File, error), data []byte, hz float64) {
	if !(hz >= 0 && hz < 1e12) {
		hz = 0
	}
	f, err := read(data, ReadOptions{FrequencyHz: hz})
	if err != nil {
		var re *ReadError
		if !errors.As(err, &re) || re.Message == "" || re.Line < 0 || re.Line > 1+strings.Count(string(data), "\n") {
			t.Fatalf("an error without a place: %v", err)
		}
		return
	}
	for phi := -3.1; phi < 3.14; phi += 0.37 {
		for theta := -1.57; theta < 1.57; theta += 0.23 {
			v := f.Pattern.Relative(phi, theta)
			r := f.Pattern.RelativeRange(Interval{phi, phi + 0.3}, Interval{theta, theta})
			if !(v >= 0 && v <= 1) || !r.Contains(v) {
				t.Fatalf("%v is outside %v at %v, %v", v, r, phi, theta)
			}
		}
	}
	if math.IsNaN(f.PeakTiltRad) || math.IsNaN(f.PeakAzimuthRad) || math.IsInf(f.PeakTiltRad, 0) {
		t.Fatal("a peak without an angle")
	}
	if _, ok := f.Pattern.(*twoCut); !ok {
		return
	}
	var b strings.Builder
	b.WriteString("# vertical cut: up\ncut,angle [deg],loss [dB]\n")
	for _, c := range []struct {
		name string
		cut  *Cut
	}{{"horizontal", f.Horizontal}, {"vertical", f.Vertical}} {
		for _, s := range c.cut.Samples() {
			fmt.Fprintf(&b, "%s,%.17g,%.17g\n", c.name, degrees(s.AngleRad), s.LossDB)
		}
	}
	g, err := readCSV([]byte(b.String()), ReadOptions{})
	if err != nil {
		t.Fatalf("written and read again: %v", err)
	}
	for _, s := range f.Vertical.Samples() {
		if d := math.Abs(g.Vertical.Loss(s.AngleRad) - s.LossDB); d > 0.06 {
			t.Fatalf("written and read again: %v dB apart", d)
		}
	}
}

func FuzzCSV(f *testing.F) {
	f.Add([]byte(lopsided(30, 30, 8, 8)), 0.0)
	f.Add([]byte("# vertical cut: down\n"+lopsided(40, 20, 12, 6)), 1e9)
	f.Add([]byte("azimuth [deg];elevation [deg];gain [dBi]\n0;-90;1,5\n120;0;2\n"), 0.0)
	f.Add([]byte("# frequency [MHz]: 790 862\ncut,angle [deg],gain [dBd]\nhorizontal,0,\"1\n"), 8e8)
	f.Fuzz(func(t *testing.T, data []byte, hz float64) { holds(t, readCSV, data, hz) })
}

func FuzzNSMA(f *testing.F) {
	f.Add([]byte(annexC()), 851e6)
	f.Add([]byte("PATFRE:,1\nPATCUT:,EL\n0,1\n"), 0.0)
	f.Add([]byte(strings.ReplaceAll(annexC(), "EL\r", "V\r")), 0.0)
	f.Fuzz(func(t *testing.T, data []byte, hz float64) { holds(t, readNSMA, data, hz) })
}

func FuzzBASTA(f *testing.F) {
	f.Add([]byte(bastaSystems()["SPCS_Geo"]), 3.6e9)
	f.Add([]byte(`{"Coordinate_System":"SPCS_CW","Theta_Sampling":[-90,90,90],"Phi_Sampling":[0,120,240],"Data_Set_Row_Structure":["MagAttenuationTP"],"Data_Set":[[1],[2],[3],[4],[0],[6],[7],[8],[9]]}`), 0.0)
	f.Add([]byte(`[{}]`), 0.0)
	f.Fuzz(func(t *testing.T, data []byte, hz float64) { holds(t, readBASTA, data, hz) })
}
