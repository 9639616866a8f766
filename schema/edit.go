package schema

// Replace is the document after the bytes from start to end were replaced by text. It equals a full reading of the new
// text: a whole file is read in well under a millisecond, so nothing of the old tree is kept. Offsets outside the text
// are clamped, and an end before start counts as start.
func (d *Document) Replace(start, end int, text string, version int32) *Document {
	start = min(max(start, 0), len(d.Text))
	end = min(max(end, start), len(d.Text))
	out := make([]byte, 0, len(d.Text)-(end-start)+len(text))
	out = append(out, d.Text[:start]...)
	out = append(out, text...)
	out = append(out, d.Text[end:]...)
	return Read(d.Name, out, version)
}
