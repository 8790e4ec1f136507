package web

// Keys of log attributes.
const (
	keyError   = "error"
	keyBrowser = "browser" // its address
	keyHost    = "host"
	keyStage   = "stage"
	keyTaken   = "taken"
	keyAsked   = "asked"
)
