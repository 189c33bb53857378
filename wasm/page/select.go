package page

// Select is a list to pick one text from.
type Select struct {
	ID, Label, Class string
	Options          []string
	Chosen           string
	Names            map[string]string // shown instead of the option's own text
	Pick             func(string)
}

func (c *Select) name(option string) string {
	if n, ok := c.Names[option]; ok {
		return n
	}
	return option
}
