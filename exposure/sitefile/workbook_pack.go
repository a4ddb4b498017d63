package sitefile

import (
	"archive/zip"
	"bytes"
	"fmt"
	"io"
	"regexp"
	"slices"
	"strings"

	"github.com/xuri/excelize/v2"
)

// packWorkbook writes a workbook so that the same cells give the same bytes: the
// library orders the archive and its list of content types by chance.
func packWorkbook(w io.Writer, f *excelize.File) error {
	var raw bytes.Buffer
	if _, err := f.WriteTo(&raw); err != nil {
		return fmt.Errorf("sitefile: write workbook: %w", err)
	}
	in, err := zip.NewReader(bytes.NewReader(raw.Bytes()), int64(raw.Len()))
	if err != nil {
		return fmt.Errorf("sitefile: write workbook: %w", err)
	}
	entries := slices.Clone(in.File)
	slices.SortFunc(entries, func(a, b *zip.File) int { return strings.Compare(a.Name, b.Name) })
	out := zip.NewWriter(w)
	for _, e := range entries {
		if err := packPart(out, e); err != nil {
			return fmt.Errorf("sitefile: write workbook part %s: %w", e.Name, err)
		}
	}
	return out.Close()
}

func packPart(out *zip.Writer, e *zip.File) error {
	if e.Name != "[Content_Types].xml" {
		return out.Copy(e)
	}
	r, err := e.Open()
	if err != nil {
		return err
	}
	defer r.Close()
	body, err := io.ReadAll(r)
	if err != nil {
		return err
	}
	part, err := out.CreateHeader(&zip.FileHeader{Name: e.Name, Method: zip.Deflate})
	if err != nil {
		return err
	}
	_, err = part.Write(sortDefaults(body))
	return err
}

var defaultElement = regexp.MustCompile(`<Default [^>]*?(/>|></Default>)`)

// sortDefaults puts the content types by file ending into order.
func sortDefaults(body []byte) []byte {
	found := defaultElement.FindAll(body, -1)
	if len(found) == 0 {
		return body
	}
	sorted := slices.Clone(found)
	slices.SortFunc(sorted, bytes.Compare)
	rest := defaultElement.ReplaceAll(body, nil)
	first := bytes.Index(body, found[0])
	return slices.Concat(rest[:first], bytes.Join(sorted, nil), rest[first:])
}
