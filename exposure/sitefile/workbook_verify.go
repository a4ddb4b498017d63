package sitefile

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"unicode/utf16"
)

// Caps on a workbook that is read. A site is a few MiB; a time log of a day at
// one reading a second is under 100,000 rows.
const (
	workbookMaxFile     = 64 << 20  // bytes of the file
	workbookMaxUnpacked = 128 << 20 // bytes of all parts together
	workbookMaxParts    = 2000
	workbookMaxRows     = 200_000
	workbookMaxColumns  = 500
)

// verifyWorkbook checks a workbook part by part before anything is believed of
// it, because the library that reads the cells answers damage with a shorter or
// altered table and no error: a lost antenna row would then be a false "within".
// It returns what the parts hold, or the one fault that makes the file unfit.
//
// The order is from cheap to dear: kind of file, directory against local
// headers, checksums, well-formed XML, relationships, then the sheets.
func verifyWorkbook(file string, data []byte) (*workbookScan, *Fault) {
	refuse := func(message string) (*workbookScan, *Fault) {
		return nil, &Fault{File: file, Message: message}
	}
	if m := sniffWorkbook(data); m != "" {
		return refuse(m)
	}
	parts, err := readParts(data)
	if err != nil {
		return refuse(err.Error())
	}
	scan, err := scanParts(parts)
	if err != nil {
		return refuse(err.Error())
	}
	return scan, nil
}

// compoundFile begins every file of the older kind: .xls, and the wrapper that
// spreadsheet programs put around a workbook with a password.
var compoundFile = []byte{0xD0, 0xCF, 0x11, 0xE0, 0xA1, 0xB1, 0x1A, 0xE1}

// sniffWorkbook tells from the first bytes what a file is, and returns "" for a
// zip archive, else the message that refuses it.
func sniffWorkbook(data []byte) string {
	switch {
	case len(data) == 0:
		return "the file is empty (0 bytes); fetch or save it again"
	case len(data) > workbookMaxFile:
		return fmt.Sprintf("the file has %d MiB, more than the %d MiB that are read; move pictures and other sheets to a file of their own",
			len(data)>>20, workbookMaxFile>>20)
	case bytes.HasPrefix(data, compoundFile):
		switch {
		case bytes.Contains(data, utf16le("EncryptedPackage")), bytes.Contains(data, utf16le("EncryptionInfo")):
			return "the workbook is locked with a password; save a copy without one and read that"
		case bytes.Contains(data, utf16le("Workbook")), bytes.Contains(data, utf16le("Book")):
			return "this is an old .xls workbook; save it as .xlsx"
		}
		return "the file is either locked with a password or an old .xls workbook; save it as .xlsx without a password"
	case len(data) < 8 && bytes.HasPrefix([]byte("PK\x03\x04"), data[:min(4, len(data))]):
		return "the workbook ends too early: its end is missing; fetch or save it again"
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		return ""
	case bytes.HasPrefix(data, []byte("PK\x05\x06")):
		return "the workbook holds nothing; fetch or save it again"
	}
	return "this is not an .xlsx workbook, whatever its name says; tables as text belong into a folder of .csv files"
}

func utf16le(s string) []byte {
	var out []byte
	for _, u := range utf16.Encode([]rune(s)) {
		out = binary.LittleEndian.AppendUint16(out, u)
	}
	return out
}

// damaged is the message for a file that cannot be what a program wrote.
func damaged(format string, args ...any) error {
	return fmt.Errorf("the workbook is damaged ("+format+"); nothing in it is read: fetch an undamaged copy, or open it in a spreadsheet program, look every sheet over and save it again", args...)
}
