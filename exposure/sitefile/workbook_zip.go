package sitefile

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
	"slices"
	"strings"
)

// part is one entry of the archive, read to its end and checked.
type part struct {
	name string
	data []byte
}

// readParts reads every entry of the archive to its end. It refuses an archive
// whose checksums, sizes or local headers do not agree with its directory.
func readParts(data []byte) ([]part, error) {
	entries, err := readDirectory(data)
	if err != nil {
		return nil, err
	}
	if err := checkLocalHeaders(data, entries); err != nil {
		return nil, err
	}
	archive, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		return nil, damaged("its directory cannot be read: %v", err)
	}
	if len(archive.File) != len(entries) {
		return nil, damaged("its directory counts %d parts and holds %d", len(archive.File), len(entries))
	}
	var parts []part
	seen := map[string]bool{}
	left := int64(workbookMaxUnpacked)
	for i, f := range archive.File {
		if f.Name != entries[i].name {
			return nil, damaged("two readings of its directory differ at part %q", f.Name)
		}
		if key := strings.ToLower(f.Name); seen[key] {
			return nil, damaged("two parts are named %q", f.Name)
		} else {
			seen[key] = true
		}
		if err := checkPartName(f.Name); err != nil {
			return nil, err
		}
		body, err := readPart(f, left)
		if err != nil {
			return nil, err
		}
		left -= int64(len(body))
		if !strings.HasSuffix(f.Name, "/") {
			parts = append(parts, part{f.Name, body})
		}
	}
	return parts, nil
}

func checkPartName(name string) error {
	if name == "" || strings.HasPrefix(name, "/") || strings.ContainsAny(name, "\\\x00") || slices.Contains(strings.Split(name, "/"), "..") {
		return damaged("a part is named %q", name)
	}
	return nil
}

// readPart reads one entry, at most left bytes, and computes the checksum
// itself: the archive reader lets a checksum of 0 pass.
func readPart(f *zip.File, left int64) ([]byte, error) {
	tooBig := fmt.Errorf("the workbook unpacks to more than %d MiB; a site is a few MiB: move pictures and other sheets to a file of their own", workbookMaxUnpacked>>20)
	if f.UncompressedSize64 > uint64(left) {
		return nil, tooBig
	}
	if f.Flags&0x1 != 0 {
		return nil, errors.New("the workbook is locked with a password; save a copy without one and read that")
	}
	r, err := f.Open()
	if err != nil {
		return nil, damaged("part %s cannot be opened: %v", f.Name, err)
	}
	defer r.Close()
	body, err := io.ReadAll(io.LimitReader(r, left+1))
	switch {
	case err != nil:
		return nil, damaged("part %s: %v", f.Name, strings.TrimPrefix(err.Error(), "zip: "))
	case int64(len(body)) > left:
		return nil, tooBig
	case uint64(len(body)) != f.UncompressedSize64:
		return nil, damaged("part %s has %d bytes where the directory says %d", f.Name, len(body), f.UncompressedSize64)
	case crc32.ChecksumIEEE(body) != f.CRC32:
		return nil, damaged("part %s does not match its checksum", f.Name)
	}
	return body, nil
}

// entry is one record of the archive's directory.
type entry struct {
	name                  string
	flags, method         uint16
	crc, packed, unpacked uint32
	offset                uint32
}

const (
	endRecord       = "PK\x05\x06"
	directoryRecord = "PK\x01\x02"
	localRecord     = "PK\x03\x04"
	inZip64         = 0xFFFFFFFF // the figure stands in an extra field instead
)

// readDirectory reads the archive's directory with its offsets, which the
// archive reader keeps to itself.
func readDirectory(data []byte) ([]entry, error) {
	end := bytes.LastIndex(data, []byte(endRecord))
	if end < 0 || len(data)-end < 22 {
		return nil, errors.New("the workbook ends too early: its end is missing; fetch or save it again")
	}
	le := binary.LittleEndian
	count := int(le.Uint16(data[end+10:]))
	size, offset := le.Uint32(data[end+12:]), le.Uint32(data[end+16:])
	comment := int(le.Uint16(data[end+20:]))
	switch {
	case end+22+comment != len(data):
		return nil, damaged("%d bytes stand after its end", len(data)-end-22-comment)
	case offset == inZip64 || count == 0xFFFF:
		return nil, errors.New("the workbook is packed as one beyond 4 GiB, which is not read; open it in a spreadsheet program and save it again")
	case int64(offset)+int64(size) > int64(end):
		return nil, damaged("its directory lies outside the file")
	case count > workbookMaxParts:
		return nil, fmt.Errorf("the workbook has %d parts, more than the %d that are read; a site has about 30", count, workbookMaxParts)
	}
	var entries []entry
	for at := int(offset); len(entries) < count; {
		if at+46 > end || string(data[at:at+4]) != directoryRecord {
			return nil, damaged("its directory breaks off after %d of %d parts", len(entries), count)
		}
		h := data[at:]
		name, extra, note := int(le.Uint16(h[28:])), int(le.Uint16(h[30:])), int(le.Uint16(h[32:]))
		if at+46+name+extra+note > end {
			return nil, damaged("its directory breaks off after %d of %d parts", len(entries), count)
		}
		entries = append(entries, entry{name: string(h[46 : 46+name]), flags: le.Uint16(h[8:]), method: le.Uint16(h[10:]),
			crc: le.Uint32(h[16:]), packed: le.Uint32(h[20:]), unpacked: le.Uint32(h[24:]), offset: le.Uint32(h[42:])})
		at += 46 + name + extra + note
	}
	return entries, nil
}

// checkLocalHeaders holds each entry of the directory against the header that
// stands before the entry's bytes: a changed name in the directory passes every
// checksum and hides a sheet.
func checkLocalHeaders(data []byte, entries []entry) error {
	le := binary.LittleEndian
	const sameFlags = 1<<0 | 1<<3 | 1<<6 | 1<<13 // locked, sizes follow, strongly locked, masked
	type span struct{ from, to int64 }
	var spans []span
	for _, e := range entries {
		if e.offset == inZip64 || int64(e.offset)+30 > int64(len(data)) || string(data[e.offset:e.offset+4]) != localRecord {
			return damaged("part %s is not where the directory says", e.name)
		}
		h := data[e.offset:]
		name, extra := int(le.Uint16(h[26:])), int(le.Uint16(h[28:]))
		body := int64(e.offset) + 30 + int64(name) + int64(extra)
		if body > int64(len(data)) || string(h[30:30+name]) != e.name {
			return damaged("part %s bears another name in the directory", e.name)
		}
		flags := le.Uint16(h[6:])
		if flags&sameFlags != e.flags&sameFlags || le.Uint16(h[8:]) != e.method {
			return damaged("the two headers of part %s differ", e.name)
		}
		if flags&(1<<3) == 0 && (le.Uint32(h[14:]) != e.crc ||
			le.Uint32(h[18:]) != inZip64 && le.Uint32(h[18:]) != e.packed ||
			le.Uint32(h[22:]) != inZip64 && le.Uint32(h[22:]) != e.unpacked) {
			return damaged("the two headers of part %s differ", e.name)
		}
		packed := int64(e.packed)
		if e.packed == inZip64 {
			packed = 0
		}
		spans = append(spans, span{int64(e.offset), body + packed})
	}
	slices.SortFunc(spans, func(a, b span) int { return int(a.from - b.from) })
	for i := 1; i < len(spans); i++ {
		if spans[i].from < spans[i-1].to {
			return damaged("two of its parts lie upon each other")
		}
	}
	return nil
}
