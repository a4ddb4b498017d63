package antenna

// MethodNote documents one method for the `methods` command, the report's
// methods sheet and the test that holds every exported formula to a source. A
// formula's doc comment ends with "Source: [ID]."
type MethodNote struct {
	ID      string `json:"id"`      // OET65-3
	Name    string `json:"name"`    // far field
	Formula string `json:"formula"` // S = P G/(4 pi r^2), in plain text
	Range   string `json:"range"`   // where it holds
	Errs    string `json:"errs"`    // on which side it errs, and by how much
	Source  string `json:"source"`  // document, edition, equation or table; "from memory" where it is
	Check   string `json:"check"`   // the Go test that holds it, TestName
	Ours    bool   `json:"ours"`    // a choice of this project, not a published one
}

// Methods lists the methods of this package.
func Methods() []MethodNote { return append([]MethodNote(nil), methodNotes...) }

var methodNotes = []MethodNote{}
