module brinkfield

go 1.26

tool (
	github.com/evanw/esbuild/cmd/esbuild
	github.com/vugu/vugu/cmd/vugugen
)

require (
	github.com/chromedp/cdproto v0.160.1 // indirect
	github.com/chromedp/chromedp v0.23.1 // indirect
	github.com/evanw/esbuild v0.28.2 // indirect
	github.com/go-json-experiment/json v0.0.0-20260213210345-44df1a37e875 // indirect
	github.com/vugu/html v0.0.0-20190914200101-c62dc20b8289 // indirect
	github.com/vugu/vjson v0.0.0-20200505061711-f9cbed27d3d9 // indirect
	github.com/vugu/vugu v0.4.0 // indirect
	github.com/vugu/xxhash v0.0.0-20191111030615-ed24d0179019 // indirect
	golang.org/x/sys v0.19.0 // indirect
	gonum.org/v1/gonum v0.17.0 // indirect
)
