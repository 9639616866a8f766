package main

import (
	"fmt"
	"strconv"
	"strings"

	"halfplane/workspace"
)

// shard is the flag --shard K/N: the K-th of N jobs takes every N-th file. The zero value takes all.
type shard struct{ k, n int }

func (s *shard) String() string {
	if s.n == 0 {
		return ""
	}
	return fmt.Sprintf("%d/%d", s.k, s.n)
}

func (s *shard) Type() string { return "K/N" }

// Set reads K/N.
func (s *shard) Set(text string) error {
	first, second, both := strings.Cut(text, "/")
	k, err1 := strconv.Atoi(first)
	n, err2 := strconv.Atoi(second)
	if !both || err1 != nil || err2 != nil || k < 1 || n < k {
		return fmt.Errorf("expects K/N with 1 ≤ K ≤ N, for example 2/4")
	}
	s.k, s.n = k, n
	return nil
}

// of picks the shard's part of the items, which are in the order of their paths.
func (s *shard) of(items []workspace.Item) []workspace.Item {
	if s.n == 0 {
		return items
	}
	var part []workspace.Item
	for i := s.k - 1; i < len(items); i += s.n {
		part = append(part, items[i])
	}
	return part
}
