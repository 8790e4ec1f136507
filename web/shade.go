package web

import "fmt"

// shades is how many colours the page has for curves of one kind; beyond that they repeat.
const shades = 8

// shade names the colour of the curve with the given index among its kind.
func shade(kind string, index int) string { return fmt.Sprintf("%s-%d", kind, index%shades) }
