package reports

import (
	"errors"

	"example.org/standclear/exposure"
)

// zoneManifest is the list of the files of WriteZones, apart from a report's, so
// that both can stand in one folder.
const zoneManifest = "zone-files.sha256"

// WriteZones writes the boundaries of an assessment alone into a folder, which
// it makes if need be, and returns the names of the files written, in
// alphabetical order: a plan of each surface that has a boundary and one with
// contour lines for each class, or the vertical section, each as SVG and PNG;
// zone.geojson, zone-settingout.csv, zone-files.sha256 and, for a site with a
// position, zone-wgs84.geojson and zone.kml. Like a report they are written all
// or none.
func WriteZones(a *exposure.Assessment, dir string, o Options) ([]string, error) {
	if a == nil || a.Site == nil {
		return nil, errors.New("reports: boundaries need their site")
	}
	return writeSet(dir, zoneManifest, o, func(w *writer) error {
		if !o.Force {
			for _, name := range []string{zoneFiles[0], zoneManifest} {
				if err := w.inTheWay(name); err != nil {
					return err
				}
			}
		}
		pictures, err := draw(w.ctx, a)
		if err != nil {
			return err
		}
		write := []func() ([]byte, error){
			func() ([]byte, error) { return GeoJSON(a, false) },
			func() ([]byte, error) { return SettingOut(a) },
		}
		if a.Site.About.HasPosition {
			write = append(write,
				func() ([]byte, error) { return GeoJSON(a, true) },
				func() ([]byte, error) { return KML(a) })
		}
		for i, made := range write {
			if err := w.put(zoneFiles[i], fromBytes(made)); err != nil {
				return err
			}
		}
		for _, p := range pictures {
			if err := w.putPicture(p, "zone-"); err != nil {
				return err
			}
		}
		return w.list()
	})
}

// zoneFiles are the files of WriteZones beside the figures; the last two ask for
// a position.
var zoneFiles = []string{"zone.geojson", "zone-settingout.csv", "zone-wgs84.geojson", "zone.kml"}
