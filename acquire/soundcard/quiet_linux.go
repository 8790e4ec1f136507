//go:build soundcard

package soundcard

/*
#cgo LDFLAGS: -ldl
#define _GNU_SOURCE
#include <dlfcn.h>

static void quiet_alsa(const char *file, int line, const char *function, int err, const char *format, ...) {}
static void quiet_jack(const char *text) {}

static void quiet(void) {
	int (*alsa)(void *) = (int (*)(void *))dlsym(RTLD_DEFAULT, "snd_lib_error_set_handler");
	void (*error)(void *) = (void (*)(void *))dlsym(RTLD_DEFAULT, "jack_set_error_function");
	void (*info)(void *) = (void (*)(void *))dlsym(RTLD_DEFAULT, "jack_set_info_function");
	if (alsa) alsa((void *)quiet_alsa);
	if (error) error((void *)quiet_jack);
	if (info) info((void *)quiet_jack);
}
*/
import "C"

import "sync"

// quiet stops the C libraries below PortAudio from writing to standard error, which belongs to the
// program: each time that devices are looked for, ALSA and JACK write dozens of lines about devices
// that their settings name and that are not there. Their functions are looked up by name, since
// PortAudio may have been built without one of them. What goes wrong comes back as an error all
// the same.
var quiet = sync.OnceFunc(func() { C.quiet() })
