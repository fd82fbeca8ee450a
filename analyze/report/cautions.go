package report

// Cautions are the usual cautions of the work, in the order in which they are
// met. They stand in every report, at the start of a capture and in the README.
// Sources: 29 CFR 1910.147(d)(5) on stored energy; trade articles on oil
// injection; the rest is common practice, no source.
func Cautions() []string {
	return []string{
		"The maker's manual, local codes, site rules and qualified persons come before anything printed here.",
		"Lock out the drive and both wheels before you fit the rig; where the tensioner's pump needs power, follow the site's procedure. Never measure with wheels that can turn.",
		"Band, springs, weights, air and oil store energy: relieve or restrain it, check, and check again if it can build up. Block the wheel before a line is opened.",
		"Stay out of the band's plane. Wear gloves and eye protection. Guards back before any run.",
		"Never pass the maker's limit for band, wheel, shaft or gauge. If the setting rises and the stretch does not follow, stop.",
		"Oil can go through skin at 100 psi (7 bar) and look like nothing: look for leaks with card, never with a hand. An injection needs a surgeon at once. Loosen no joint under pressure.",
		"Cracked or suspect bands are not test bands.",
		"Keep cables and rig off the teeth. Take the rig off before any run.",
	}
}
