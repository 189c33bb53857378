// Package browser is the page's door to the browser: address bar, files in and
// out, clipboard, print, theme, offline mark, plots, focus, and the engine.
//
// It and the engine's end of the message channel are the only code that touches
// JavaScript. What is easier said there lives in site/boot and is reached through
// window.brinkfield; this package wraps it in plain Go types.
//
// Rule of the house: a callback given to this package runs on the page's loop,
// with the renderer's lock held and a render to follow, exactly like a handler of
// a click. Nothing here blocks, and everything may be called from a handler.
// A callback that panics is shown in the banner and the page goes on.
//
// The pool of workers (Engine) is plain Go and natively tested; so are the types.
package browser
