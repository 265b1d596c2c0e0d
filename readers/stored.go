package readers

// A stored is a run of bytes in a file, as they are or in base64.
type stored struct {
	file     *file
	start    int64 // offset of the array's text in the file
	before   int64 // characters of the text before this run
	shift    int64 // decoded bytes of the run before the first that counts
	isBase64 bool
	wrapped  *index // base64 with white space between its characters; nil: without
}

// read fills to with the bytes from low on.
func (s *stored) read(c *cursor, to []byte, low int64) error {
	low += s.shift
	if !s.isBase64 {
		return c.hand.readAt(s.file, to, s.start+low)
	}
	for len(to) > 0 {
		skip := int(low % 3)
		groups := min((skip+len(to)+2)/3, base64Step)
		place := low / 3 * 4
		text, err := s.characters(c, place, 4*groups)
		if err != nil {
			return err
		}
		decoded := room(&c.decoded, 3*groups)
		n, fault := decodeBase64(decoded, text)
		if fault >= 0 {
			return s.file.fail(s.start+s.before+place+int64(fault),
				malformed("found %q, need base64 characters", text[fault:fault+4]))
		}
		if n < min(3*groups, skip+len(to)) {
			return s.file.fail(s.start+s.before+place, malformed("found the end of the base64 text, need %d more bytes", skip+len(to)-n))
		}
		n = copy(to, decoded[skip:n])
		to, low = to[n:], low+int64(n)
	}
	return nil
}

// base64Step is how many groups of four characters are decoded at once.
const base64Step = 16 << 10

// characters returns base64 characters of the run from a place on, white space left
// out. They are valid until the next call.
func (s *stored) characters(c *cursor, place int64, count int) ([]byte, error) {
	place += s.before
	if s.wrapped == nil {
		text := room(&c.text, count)
		return text, c.hand.readAt(s.file, text, s.start+place)
	}
	page, before, found, err := s.wrapped.page(&c.hand, room(&c.page, pageSize+1), place)
	if err != nil {
		return nil, err
	}
	if !found {
		return nil, s.file.fail(s.wrapped.end, truncated("%d base64 characters needed, found %d", place+int64(count), before))
	}
	result := room(&c.text, count)[:0]
	skip := place - before
	for offset := s.start + page*pageSize; len(result) < count; offset += pageSize {
		if offset >= s.wrapped.end {
			return nil, s.file.fail(s.wrapped.end, truncated("%d base64 characters needed, found %d", count, len(result)))
		}
		text := room(&c.page, int(min(pageSize, s.wrapped.end-offset)))
		if err := c.hand.readAt(s.file, text, offset); err != nil {
			return nil, err
		}
		for _, character := range text {
			if character <= ' ' {
				continue
			}
			if skip--; skip < 0 && len(result) < count {
				result = append(result, character)
			}
		}
	}
	return result, nil
}
