package limits

// Table is a validated limit table: the bands of every class, in the order of
// the file, with who stands behind it.
type Table struct {
	Rows  []Row
	About About
	Spots []Spot
}
