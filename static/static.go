// Package static holds the dashboard's page, style and script, and the chart library that npm brings,
// embedded into the program. It may not know anything of the rest.
package static

import (
	"embed"
	"fmt"
	"io/fs"
)

//go:embed page
var embedded embed.FS

// ChartLibrary is the file in Page that does not lie in the repository: `make` fetches it by the lock
// file before the program is built.
const ChartLibrary = "echarts.min.js"

// Page returns the page's files, index.html among them. They are read-only.
func Page() fs.FS {
	page, err := fs.Sub(embedded, "page")
	if err != nil {
		panic(fmt.Sprintf("static: %v", err))
	}
	return page
}
