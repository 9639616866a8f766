package lsp

import (
	"strings"

	"go.lsp.dev/protocol"
)

// page is a hover's text as it grows: narrow Markdown, or plain text for a client that shows nothing else.
type page struct {
	markdown bool
	text     strings.Builder
}

func (p *page) empty() bool { return p.text.Len() == 0 }

// title starts a part of the page; a rule stands between parts.
func (p *page) title(name, beside string) {
	if !p.empty() {
		p.text.WriteString(p.either("\n---\n\n", "\n"))
	}
	p.text.WriteString(p.either("**"+escaped(name)+"**", name))
	if beside != "" {
		p.text.WriteString(" · " + p.plain(beside))
	}
	p.text.WriteByte('\n')
}

// say writes a paragraph.
func (p *page) say(words string) {
	if words = strings.TrimSpace(words); words != "" {
		p.text.WriteString("\n" + p.plain(words) + "\n")
	}
}

// formula writes a line of code as a paragraph of its own.
func (p *page) formula(code string) {
	if code = strings.TrimSpace(code); code != "" {
		p.text.WriteString("\n" + p.either(codeSpan(code), code) + "\n")
	}
}

// list writes short lines, one item each.
func (p *page) list(items []string) {
	if len(items) == 0 {
		return
	}
	p.text.WriteByte('\n')
	for _, item := range items {
		p.text.WriteString("- " + p.plain(item) + "\n")
	}
}

func (p *page) either(markdown, plain string) string {
	if p.markdown {
		return markdown
	}
	return plain
}

// plain is text that must show as it is.
func (p *page) plain(words string) string {
	words = strings.Join(strings.Fields(words), " ")
	if p.markdown {
		return escaped(words)
	}
	return words
}

func (p *page) contents() protocol.HoverContents {
	kind := protocol.MarkupKindPlainText
	if p.markdown {
		kind = protocol.MarkupKindMarkdown
	}
	return &protocol.MarkupContent{Kind: kind, Value: strings.TrimRight(p.text.String(), "\n")}
}

// markup is what Markdown would take for its own inside a line: text from a file must not become a link, an image, HTML
// or emphasis. No more is escaped than that, since some editors show the text as it is.
var markup = strings.NewReplacer(`\`, `\\`, "`", "\\`", "*", `\*`, "_", `\_`, "[", `\[`, "<", `\<`, "~", `\~`, "&", `\&`)

func escaped(words string) string { return markup.Replace(words) }

// codeSpan fences code by more backticks than it holds in a row (CommonMark section 6.1).
func codeSpan(code string) string {
	code = strings.Join(strings.Fields(code), " ")
	longest, run := 0, 0
	for _, r := range code {
		if r == '`' {
			run++
			longest = max(longest, run)
		} else {
			run = 0
		}
	}
	fence := strings.Repeat("`", longest+1)
	if longest > 0 {
		return fence + " " + code + " " + fence
	}
	return fence + code + fence
}
