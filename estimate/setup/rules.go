package setup

// A rule finds all there is to say about one kind. It leaves Channels and the channels' names at the
// head of Text to the caller, and Kind too where it is the rule's.
type rule struct {
	kind Kind
	find func(*check) []Finding
}

// rules are all of them. Findings about one channel that are equally bad stand in this order: what
// makes the later ones meaningless comes first.
var rules = []rule{
	{NotMeasured, notMeasured},
	{TooShort, tooShort},
	{DeadChannel, deadChannels},
	{RailedChannel, railedChannels},
	{Overrange, overranges},
	{TwinChannels, twinChannels},
	{NotDriven, notDriven},
	{PowerFlow, powerFlows},
	{DCOffset, dcOffsets},
	{NoiseLevel, noiseLevels},
	{NoiseRise, noiseRises},
	{MainsHum, mainsHum},
	{Headroom, headrooms},
	{ForceDrop, forceDrops},
	{SignalToNoise, signalToNoise},
}
