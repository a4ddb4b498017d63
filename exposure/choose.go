package exposure

import "fmt"

// choose sets the emitter of a source by its method column, and says why.
func (c *compiled) choose(s *Source, ground Ground) error {
	p := s.place()
	switch s.Method {
	case MethodFarField, MethodAuto, "":
		c.em = newFarField(p, s.Pattern, float64(s.Gain))
		c.method = string(MethodFarField)
		c.reactive = p.reactive
		c.why = "as the method column asks"
		if s.Method != MethodFarField {
			c.why = "no length or dish is stated that a near-field method could use"
		}
	default:
		return fmt.Errorf("method %q is not one of auto, far field, cylindrical, array, aperture, wire", s.Method)
	}
	return nil
}
