// Command serve shows the built page on this machine, at an address only this
// machine can reach. It takes $PORT, or 8080, or the next free one after it.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"net"
	"net/http"
	"os"
	"os/exec"
	"os/signal"
	"strconv"
	"strings"
	"syscall"
	"time"
)

func main() {
	dir := flag.String("dir", "site/dist", "folder to serve")
	open := flag.Bool("open", true, "open the browser where there is a display")
	flag.Parse()
	if err := serve(*dir, *open); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func serve(dir string, open bool) error {
	if _, err := os.Stat(dir); err != nil {
		return fmt.Errorf("serve: no page in %s (%w), expected a build there", dir, err)
	}
	l, err := listen(os.Getenv("PORT"))
	if err != nil {
		return err
	}
	address := "http://" + l.Addr().String() + "/"
	fmt.Printf("Brinkfield is at %s (Ctrl-C ends it)\n", address)
	if open {
		show(address)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	server := &http.Server{Handler: fresh(http.FileServer(http.Dir(dir))), ReadHeaderTimeout: 5 * time.Second}
	go func() {
		<-ctx.Done()
		server.Close()
	}()
	if err := server.Serve(l); !errors.Is(err, http.ErrServerClosed) {
		return err
	}
	fmt.Println("\nstopped")
	return nil
}

// listen takes the wanted port, or the first free one from 8080 on.
func listen(wanted string) (net.Listener, error) {
	if wanted != "" {
		if n, err := strconv.Atoi(wanted); err != nil || n < 0 || n > 65535 {
			return nil, fmt.Errorf("serve: PORT is no port (%s), expected 0 to 65535", wanted)
		}
		return net.Listen("tcp", "127.0.0.1:"+wanted)
	}
	var err error
	for port := 8080; port < 8180; port++ {
		var l net.Listener
		if l, err = net.Listen("tcp", "127.0.0.1:"+strconv.Itoa(port)); err == nil {
			return l, nil
		}
	}
	return nil, err
}

// fresh keeps the browser from holding on to the files whose names do not change.
func fresh(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		if strings.Count(r.URL.Path, ".") < 2 {
			w.Header().Set("Cache-Control", "no-cache")
		}
		next.ServeHTTP(w, r)
	})
}

func show(address string) {
	if os.Getenv("DISPLAY") == "" && os.Getenv("WAYLAND_DISPLAY") == "" {
		return
	}
	if c := exec.Command("xdg-open", address); c.Start() == nil {
		go func() { _ = c.Wait() }() // its answer does not matter
	}
}
