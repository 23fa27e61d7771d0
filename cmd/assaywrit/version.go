package main

import "assaywrit/evidence"

// The engine names itself in every record. Raise the version with each change that may alter a recorded value.
const (
	engineName    = "assaywrit"
	engineVersion = "0.1.0"
)

func engine() evidence.Engine { return evidence.Engine{Name: engineName, Version: engineVersion} }
