
// only a comment