package signal

import "fmt"

// nameOf is the name of a value of a small enumeration; one of no name has its
// number.
func nameOf[T ~int](value T, names ...string) string {
	if value < 0 || int(value) >= len(names) {
		return fmt.Sprintf("%T(%d)", value, int(value))
	}
	return names[value]
}
