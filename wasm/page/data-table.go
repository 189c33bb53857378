package page

import "github.com/vugu/vugu"

// DataTable is a table in a box that scrolls by itself.
type DataTable struct {
	ID, Caption, Sub string
	Head             []Cell
	Rows             []Row
}

func (c *DataTable) caption() vugu.HTML { return pretty(c.Caption) }
