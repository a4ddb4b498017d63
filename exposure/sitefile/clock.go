package sitefile

import (
	"strconv"
	"strings"
	"time"
)

// zone is a stated offset from UTC.
type zone struct {
	known   bool
	offsetS int
}

// parseZone reads an offset from UTC: Z, UTC, +05:00, -0330, UTC+5. Names of
// regions are refused: what they mean depends on rules that change.
func parseZone(text string) (zone, bool) {
	t := strings.ToUpper(strings.ReplaceAll(strings.TrimSpace(text), " ", ""))
	if t == "Z" || t == "UTC" || t == "GMT" {
		return zone{known: true}, true
	}
	t = strings.TrimPrefix(strings.TrimPrefix(t, "UTC"), "GMT")
	if len(t) < 2 || t[0] != '+' && t[0] != '-' {
		return zone{}, false
	}
	hours, minutes, colon := strings.Cut(t[1:], ":")
	if !colon && len(hours) == 4 {
		hours, minutes = hours[:2], hours[2:]
	}
	h, err := strconv.ParseUint(hours, 10, 8)
	if err != nil || h > 14 || len(hours) > 2 {
		return zone{}, false
	}
	var m uint64
	if minutes != "" || colon {
		if m, err = strconv.ParseUint(minutes, 10, 8); err != nil || m > 59 || len(minutes) != 2 {
			return zone{}, false
		}
	}
	s := int(h*3600 + m*60)
	if t[0] == '-' {
		s = -s
	}
	return zone{known: true, offsetS: s}, true
}

// clock reads times, remembering the day of the one before: most samples of a
// log share it.
type clock struct {
	zone    zone
	day     [10]byte
	dayNS   int64
	hasDay  bool
	offsetS int // of the last time read
}

const timeHint = "is not a time; write it as 2026-03-31T10:05:00Z, or as 2026-03-31 10:05:00 with the zone stated in the header, such as time [+01:00]"

// parse returns a time in ns since 1970 UTC: RFC 3339, or a local time
// (2026-03-31 10:05:00, 31.03.2026 10:05:00, 2026/03/31 10:05:00) where the zone
// is stated. problem says what is wrong, "" where nothing is.
func (c *clock) parse(b []byte) (ns int64, problem string) {
	if len(b) < 16 || b[10] != 'T' && b[10] != ' ' && b[10] != 't' {
		return 0, timeHint
	}
	if !c.hasDay || string(b[:10]) != string(c.day[:]) {
		if !c.newDay(b[:10]) {
			return 0, timeHint
		}
	}
	h, ok1 := two(b[11:])
	m, ok2 := two(b[14:])
	if !ok1 || !ok2 || b[13] != ':' || h > 23 || m > 59 {
		return 0, timeHint
	}
	rest := b[16:]
	s := int64(0)
	var fraction int64
	if len(rest) >= 3 && rest[0] == ':' {
		v, ok := two(rest[1:])
		if !ok || v > 59 {
			return 0, timeHint
		}
		s, rest = v, rest[3:]
		if len(rest) > 1 && (rest[0] == '.' || rest[0] == ',') {
			n := 1
			scale := int64(1e8)
			for ; n < len(rest) && rest[n] >= '0' && rest[n] <= '9'; n++ {
				fraction += int64(rest[n]-'0') * scale
				scale /= 10
			}
			if n == 1 {
				return 0, timeHint
			}
			rest = rest[n:]
		}
	}
	offset := c.zone.offsetS
	switch {
	case len(rest) == 0:
		if !c.zone.known {
			return 0, "has no zone; state it in the header, such as time [+01:00], or in the columns table"
		}
	case len(rest) == 1 && (rest[0] == 'Z' || rest[0] == 'z'):
		offset = 0
	case len(rest) == 6 && (rest[0] == '+' || rest[0] == '-') && rest[3] == ':':
		zh, ok1 := two(rest[1:])
		zm, ok2 := two(rest[4:])
		if !ok1 || !ok2 || zh > 23 || zm > 59 {
			return 0, timeHint
		}
		offset = int(zh*3600 + zm*60)
		if rest[0] == '-' {
			offset = -offset
		}
	default:
		return 0, timeHint
	}
	c.offsetS = offset
	return c.dayNS + ((h*60+m)*60+s-int64(offset))*1e9 + fraction, ""
}

// newDay reads the date of a time.
func (c *clock) newDay(b []byte) bool {
	layout := ""
	switch {
	case b[4] == '-' && b[7] == '-':
		layout = "2006-01-02"
	case b[4] == '/' && b[7] == '/':
		layout = "2006/01/02"
	case b[2] == '.' && b[5] == '.':
		layout = "02.01.2006"
	default: // 03/04/2026 is the third of April or the fourth of March
		return false
	}
	day, err := time.Parse(layout, string(b))
	// Nanoseconds since 1970 fit an int64 from 1678 to 2262.
	if err != nil || day.Year() < 1900 || day.Year() > 2200 {
		return false
	}
	copy(c.day[:], b)
	c.dayNS, c.hasDay = day.UnixNano(), true
	return true
}

func two(b []byte) (int64, bool) {
	if len(b) < 2 {
		return 0, false
	}
	x, y := b[0]-'0', b[1]-'0'
	return int64(x)*10 + int64(y), x <= 9 && y <= 9
}
