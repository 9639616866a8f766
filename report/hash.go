package report

import (
	"crypto/sha256"
	"encoding/hex"

	"halfplane/workspace"
)

// hashOf is the SHA-256 of the file that was checked, "" where nothing could be read.
func hashOf(f workspace.File) string {
	if f.StandIn || f.SHA256 != "" || f.Document == nil || len(f.Document.Text) == 0 {
		return f.SHA256
	}
	sum := sha256.Sum256(f.Document.Text)
	return hex.EncodeToString(sum[:])
}
