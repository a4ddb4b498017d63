package survey

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// ScaleMethod is how a reading at the traffic of the day is carried to maximum
// traffic.
type ScaleMethod string

// The methods: what was measured as the reference.
const (
	BroadcastCarrier ScaleMethod = "GSM broadcast carrier"
	Pilot            ScaleMethod = "UMTS pilot"
	ReferenceSignal  ScaleMethod = "LTE reference signal"
	SyncBlock        ScaleMethod = "NR synchronization block"
	PowerShare       ScaleMethod = "power share"
)

// Scale is a method with its figures, as ratios.
type Scale struct {
	Method      ScaleMethod
	Text        string  // as typed
	Carriers    float64 // broadcast carrier: carriers of the cell, all at the reference's power
	Share       float64 // pilot, power share: part of the full power that was measured
	Subcarriers float64 // reference signal, synchronization block
	Boost       float64 // power ratio of a reference-signal element to a data element
	BeamGain    float64 // power ratio of the traffic beam's gain to that of the block's beam
	TDDShare    float64 // share of the frame that the cell transmits
	PowerFactor float64 // power reduction factor of the actual maximum
	Ports       float64 // antenna ports in all; 0 = those that the reading covers
}

// BroadcastCarrierFactor returns the field factor sqrt(n) from a GSM broadcast
// carrier to a cell of n carriers of equal power, n at least 1. It errs on the
// high side: traffic carriers transmit with power control and pauses.
// Source: [RDG-GSM].
func BroadcastCarrierFactor(carriers float64) float64 { return math.Sqrt(carriers) }

// PilotFactor returns the field factor sqrt(1/share) from a UMTS pilot to the
// cell's full power; share is the pilot's share of it, above 0 and at most 1.
// Source: [RDG-UMTS].
func PilotFactor(share float64) float64 { return math.Sqrt(1 / share) }

// ReferenceSignalFactor returns the field factor sqrt(N/BF) from one resource
// element of an LTE reference signal to all N subcarriers at full load; boost is
// BF, the power ratio of that element to a data element, above 0.
// Source: [RDG-LTE].
func ReferenceSignalFactor(subcarriers, boost float64) float64 {
	return math.Sqrt(subcarriers / boost)
}

// SyncBlockFactor returns the field factor sqrt(N F_beam F_TDD F_PR) from one
// resource element of an NR synchronization block to all N subcarriers: beamGain
// is the power ratio of the traffic beam's gain to the block's beam toward the
// point, tddShare the share of the frame transmitted, powerFactor the power
// reduction factor, each above 0.
// Source: [RDG-NR].
func SyncBlockFactor(subcarriers, beamGain, tddShare, powerFactor float64) float64 {
	return math.Sqrt(subcarriers * beamGain * tddShare * powerFactor)
}

// PowerShareFactor returns the field factor sqrt(1/share) where a share of the
// full power was on air during the reading; above 0 and at most 1.
// Source: [RDG-SHARE].
func PowerShareFactor(share float64) float64 { return math.Sqrt(1 / share) }

// Factor returns what the measured field is multiplied by. readPorts is the
// number of antenna ports that the reading covers: reference powers are summed
// over ports.
func (s *Scale) Factor(readPorts int) float64 {
	if s == nil {
		return 1
	}
	k := 1.0
	switch s.Method {
	case BroadcastCarrier:
		k = BroadcastCarrierFactor(s.Carriers)
	case Pilot:
		k = PilotFactor(s.Share)
	case ReferenceSignal:
		k = ReferenceSignalFactor(s.Subcarriers, s.Boost)
	case SyncBlock:
		k = math.Sqrt(s.Subcarriers)
	case PowerShare:
		k = PowerShareFactor(s.Share)
	}
	k *= math.Sqrt(s.BeamGain * s.TDDShare * s.PowerFactor)
	if s.Ports > 0 {
		k *= math.Sqrt(s.Ports / float64(max(readPorts, 1)))
	}
	return k
}

// Formula writes the factor with its figures, for the report.
func (s *Scale) Formula(readPorts int) string {
	if s == nil {
		return ""
	}
	var parts []string
	add := func(name string, v float64, always bool) {
		if always || v != 1 && v != 0 {
			parts = append(parts, fmt.Sprintf("%s %.4g", name, v))
		}
	}
	switch s.Method {
	case BroadcastCarrier:
		add("carriers", s.Carriers, true)
	case Pilot, PowerShare:
		add("1/share, share", s.Share, true)
	case ReferenceSignal:
		add("subcarriers", s.Subcarriers, true)
		add("1/boost, boost", s.Boost, false)
	case SyncBlock:
		add("subcarriers", s.Subcarriers, true)
		add("beam gain ratio", s.BeamGain, false)
	}
	add("TDD share", s.TDDShare, false)
	add("power factor", s.PowerFactor, false)
	if s.Ports > 0 {
		parts = append(parts, fmt.Sprintf("ports %g/%d", s.Ports, max(readPorts, 1)))
	}
	k := s.Factor(readPorts)
	return fmt.Sprintf("%s: sqrt(%s) = %.4g (%.2f dB)", s.Method, strings.Join(parts, " * "), k, 20*math.Log10(k))
}

// lteBlocks are the resource blocks of the channel bandwidths of LTE, in MHz
// (3GPP TS 36.101, table 5.6-1, from memory).
var lteBlocks = map[float64]float64{1.4: 6, 3: 15, 5: 25, 10: 50, 15: 75, 20: 100}

// blockSubcarriers is the number of subcarriers of a resource block (3GPP TS
// 36.211 and TS 38.211).
const blockSubcarriers = 12

// scaleFigures lists, for each method, the figures that may stand behind it; the
// first is needed.
var scaleFigures = []struct {
	method  ScaleMethod
	needed  []string // one of these
	allowed []string
	example string
}{
	{BroadcastCarrier, []string{"carriers"}, []string{"power factor"}, "GSM broadcast carrier: carriers 4"},
	{Pilot, []string{"pilot share"}, []string{"power factor"}, "UMTS pilot: pilot share 10 %"},
	{ReferenceSignal, []string{"bandwidth", "subcarriers", "resource blocks"}, []string{"boost", "ports", "tdd share", "power factor"}, "LTE reference signal: bandwidth 20 MHz, boost 3 dB, ports 2"},
	{SyncBlock, []string{"subcarriers", "resource blocks"}, []string{"beam gain", "ports", "tdd share", "power factor"}, "NR synchronization block: resource blocks 273, beam gain 6 dB, TDD share 0.75, power factor 0.25"},
	{PowerShare, []string{"share"}, nil, "power share: share 25 %"},
}

// ScaleExamples returns a well-formed text for each method.
func ScaleExamples() []string {
	var out []string
	for _, m := range scaleFigures {
		out = append(out, m.example)
	}
	return out
}

// ParseScale reads the text of the column scale to maximum: a method, a colon
// and its figures, parted by commas or semicolons:
//
//	LTE reference signal: bandwidth 20 MHz, boost 3 dB, ports 2
//
// A figure is a number, or one with %, dB or MHz. The error says what to write.
func ParseScale(text string) (*Scale, error) {
	name, rest, _ := strings.Cut(text, ":")
	name = strings.Join(strings.Fields(strings.ToLower(name)), " ")
	for _, m := range scaleFigures {
		if strings.ToLower(string(m.method)) != name {
			continue
		}
		s := &Scale{Method: m.method, Text: text, Carriers: 1, Share: 1, Subcarriers: 1, Boost: 1, BeamGain: 1, TDDShare: 1, PowerFactor: 1}
		seen := map[string]bool{}
		for _, figure := range strings.FieldsFunc(rest, func(r rune) bool { return r == ',' || r == ';' }) {
			figure = strings.Join(strings.Fields(strings.ToLower(figure)), " ")
			if figure == "" {
				continue
			}
			key := ""
			for _, k := range append(append([]string(nil), m.needed...), m.allowed...) {
				if strings.HasPrefix(figure, k+" ") {
					key = k
				}
			}
			if key == "" {
				return nil, fmt.Errorf("%q is no figure of the method %s; write it like %q", figure, m.method, m.example)
			}
			if seen[key] {
				return nil, fmt.Errorf("%s is given twice; keep one", key)
			}
			seen[key] = true
			if err := s.set(key, strings.TrimSpace(figure[len(key):])); err != nil {
				return nil, err
			}
		}
		n := 0
		for _, k := range m.needed {
			if seen[k] {
				n++
			}
		}
		if n != 1 {
			return nil, fmt.Errorf("the method %s takes %s; write it like %q", m.method, oneOf(m.needed), m.example)
		}
		return s, nil
	}
	var names []string
	for _, m := range scaleFigures {
		names = append(names, string(m.method))
	}
	return nil, fmt.Errorf("%q names no method; it may be %s, with its figures behind a colon, such as %q", text, strings.Join(names, ", "), scaleFigures[2].example)
}

func oneOf(names []string) string {
	if len(names) == 1 {
		return "the figure " + names[0]
	}
	return "one of the figures " + strings.Join(names, ", ")
}

// set reads one figure.
func (s *Scale) set(key, text string) error {
	number, unit := text, ""
	if i := strings.IndexFunc(text, func(r rune) bool { return !strings.ContainsRune("0123456789.+-", r) }); i >= 0 {
		number, unit = strings.TrimSpace(text[:i]), strings.TrimSpace(text[i:])
	}
	v, err := strconv.ParseFloat(number, 64)
	bad := func(want string) error {
		return fmt.Errorf("%s %s: write %s", key, text, want)
	}
	if err != nil || math.IsInf(v, 0) || math.IsNaN(v) {
		return bad("a number, such as " + key + " 4")
	}
	whole := func() error {
		if unit != "" || v < 1 || v > 1e5 || v != math.Trunc(v) {
			return bad("a whole number of 1 or more, without a unit")
		}
		return nil
	}
	part := func(to *float64) error {
		if unit == "%" {
			v, unit = v/100, ""
		}
		if unit != "" || !(v > 0 && v <= 1) {
			return bad("a share above 0 and at most 1, or in %")
		}
		*to = v
		return nil
	}
	ratio := func(to *float64) error {
		if unit != "db" || math.Abs(v) > 60 {
			return bad("a ratio in dB, such as " + key + " 3 dB")
		}
		*to = math.Pow(10, v/10)
		return nil
	}
	switch key {
	case "carriers":
		s.Carriers = v
		return whole()
	case "subcarriers":
		s.Subcarriers = v
		return whole()
	case "resource blocks":
		s.Subcarriers = blockSubcarriers * v
		return whole()
	case "bandwidth":
		blocks, ok := lteBlocks[v]
		if unit != "mhz" || !ok {
			return bad("one of the LTE bandwidths 1.4, 3, 5, 10, 15 or 20 MHz, or give subcarriers in its place")
		}
		s.Subcarriers = blockSubcarriers * blocks
		return nil
	case "ports":
		s.Ports = v
		return whole()
	case "pilot share", "share":
		return part(&s.Share)
	case "tdd share":
		return part(&s.TDDShare)
	case "power factor":
		return part(&s.PowerFactor)
	case "boost":
		return ratio(&s.Boost)
	case "beam gain":
		return ratio(&s.BeamGain)
	}
	panic("survey: figure " + key)
}
